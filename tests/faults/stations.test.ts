/** Stations that are killed, frozen or poisoned: another goes on from the checkpoint, and nothing is counted twice. */
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { rightCertificate, startPool, until, type PoolUnderTest, type ToyStation } from '../station/pool-under-test.ts';
import { TOY_PARCELS } from '../station/toy-question.ts';

let database: TestDatabase;
let pool: PoolUnderTest;
let ada: Awaited<ReturnType<PoolUnderTest['person']>>;
const running: ToyStation[] = [];

beforeAll(async () => {
  database = await testDatabase();
  pool = await startPool(database);
  ada = await pool.person('ada');
});
afterEach(async () => {
  for (const station of running.splice(0)) {
    station.signal('SIGKILL');
    await station.gone();
  }
});
afterAll(async () => {
  await pool?.close();
  await database?.drop();
});

async function start(name: string, workers: number): Promise<ToyStation> {
  const station = await pool.station(name, workers);
  running.push(station);
  return station;
}

const listing = async (id: string) => (await pool.parcels(id)).filter((p) => p.phase === 'listing');
const nodesOf = async (id: string) => (await listing(id)).reduce((sum, p) => sum + Number(p.nodes), 0);
const N = 16_000;
/** The lopsided cover's last parcel: it runs for about two seconds, time enough to do something to its station. */
const LONG_FROM = String((TOY_PARCELS - 1) * (N / 100));
const inHand = async (id: string) =>
  (await listing(id)).find((p) => p.from_address[0] === LONG_FROM && p.state === 'leased' && Number(p.nodes) > 0);

describe('kill -9', () => {
  it('in the middle of a parcel: another station goes on from the checkpoint to the same certificate', async () => {
    const { id, document } = await pool.ask(ada, N, 'lopsided; spin 150');
    const first = await start('killed', 2);
    await until('a parcel has a checkpoint', () => inHand(id));
    first.signal('SIGKILL');
    await first.gone();
    const left = (await inHand(id))!;
    expect(left).toBeDefined();

    await start('heir', 2);
    await pool.reaches(ada, id, ['settled', 'broken']);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    expect(await nodesOf(id)).toBe(N);
    const after = (await listing(id)).find((p) => p.id === left.id)!;
    expect(after.attempt).toBeGreaterThan(left.attempt);
  });
});

describe('a station that is frozen and wakes up', () => {
  it('cannot write: its parcel has gone on without it', async () => {
    const { id, document } = await pool.ask(ada, N, 'lopsided; spin 150');
    const frozen = await start('frozen', 1);
    const held = await until('a parcel has a checkpoint', () => inHand(id));
    frozen.signal('SIGSTOP');
    const heir = await start('heir', 1);
    await until('the parcel has another holder', async () => {
      const now = (await listing(id)).find((p) => p.id === held.id);
      return now!.attempt > held.attempt && now!.state !== 'waiting';
    });
    frozen.signal('SIGCONT');
    await until('the woken station has seen it', () => frozen.log.some((line) => line.includes('not ours any more')));
    await pool.reaches(ada, id, ['settled', 'broken']);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    expect(await nodesOf(id)).toBe(N);
    expect(heir.child.exitCode).toBeNull();
  });
});

describe('a parcel that kills its thread', () => {
  it('is tried again alone and is broken with a reason; other searches go on', async () => {
    await start('tough', 2);
    const bad = await pool.ask(ada, 6_000, 'crash at 4500; spin 10');
    const good = await pool.ask(ada, 10_000, 'spin 80');
    const seen = await pool.reaches(ada, bad.id, ['broken', 'settled']);
    expect(seen).toMatchObject({ state: 'broken', verdict: 'open' });
    expect(seen.reason).toContain('ended with code 7');
    await pool.reaches(ada, good.id, ['settled']);
    expect(await pool.certificate(good.id)).toBe(rightCertificate(good.document));
  });
});
