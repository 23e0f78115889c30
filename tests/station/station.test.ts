/** The station's loops on a real database, with real threads and an engine that only counts. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { rightCertificate, startPool, until, type PoolUnderTest, type ToyStation } from './pool-under-test.ts';
import { TOY_PARCELS } from './toy-question.ts';

let database: TestDatabase;
let pool: PoolUnderTest;
let station: ToyStation;
let ada: Awaited<ReturnType<PoolUnderTest['person']>>;

beforeAll(async () => {
  database = await testDatabase();
  pool = await startPool(database);
  ada = await pool.person('ada');
  station = await pool.station('one', 2);
});
afterAll(async () => {
  await pool?.close();
  await database?.drop();
});

const nothingLeased = async (questionId: string) =>
  (await pool.parcels(questionId)).every((parcel) => parcel.state !== 'leased');

describe('a search', () => {
  it('is settled at the first look where it is small', async () => {
    const { id, document } = await pool.ask(ada, 3_000, 'quick');
    const seen = await pool.reaches(ada, id, ['settled', 'broken']);
    expect(seen).toMatchObject({ state: 'settled', verdict: 'embeds', complete: true, rank: 3, dimension: 3 });
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
  });

  it('is settled from parcels that cover it, every number counted once', async () => {
    const { id, document } = await pool.ask(ada, 20_000);
    const seen = await pool.reaches(ada, id, ['settled', 'broken']);
    expect(seen).toMatchObject({ state: 'settled', verdict: 'embeds', method: 'counted' });
    expect(seen.certificate?.checkerLine).toBe('the toy checker has counted again');
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    const listing = (await pool.parcels(id)).filter((p) => p.phase === 'listing');
    expect(listing.length).toBeGreaterThanOrEqual(TOY_PARCELS);
    expect(listing.reduce((sum, p) => sum + Number(p.nodes), 0)).toBe(20_000);
    expect(await nothingLeased(id)).toBe(true);
  });

  it('goes through several stages, and a long check in parcels of its own', async () => {
    const { id, document } = await pool.ask(ada, 5_000, 'stages 2, long check');
    await pool.reaches(ada, id, ['settled', 'broken']);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    const phases = (await pool.parcels(id)).map((p) => p.phase);
    expect(phases.filter((phase) => phase === 'listing').length).toBeGreaterThanOrEqual(2 * TOY_PARCELS);
    expect(phases.filter((phase) => phase === 'checking').length).toBeGreaterThanOrEqual(2);
  });

  it('of scope one ends with the first witness; the other parcels are not needed', async () => {
    const { id, document } = await pool.ask(ada, 60_000, 'one at 100; spin 30');
    await pool.reaches(ada, id, ['settled', 'broken']);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    expect((await pool.parcels(id)).some((p) => p.state === 'unneeded')).toBe(true);
    await until('nothing is leased', () => nothingLeased(id));
  });

  it('is broken, not settled, when the checker rejects, and says why', async () => {
    const { id } = await pool.ask(ada, 2_000, 'rejected');
    const seen = await pool.reaches(ada, id, ['settled', 'broken']);
    expect(seen).toMatchObject({ state: 'broken', verdict: 'open', certificate: null });
    expect(seen.reason).toContain('the checker did not accept the certificate');
  });

  it('that has no lattice is broken with place and reason', async () => {
    const { id } = await pool.ask(ada, 0);
    const seen = await pool.reaches(ada, id, ['settled', 'broken']);
    expect(seen).toMatchObject({ state: 'broken', verdict: 'open' });
    expect(seen.reason).toContain('/source/p expected something to count');
  });

  it('has a long parcel cut again while a worker is idle', async () => {
    const { id, document } = await pool.ask(ada, 3_000, 'lopsided; spin 1500');
    await pool.reaches(ada, id, ['settled', 'broken'], 90);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    const listing = (await pool.parcels(id)).filter((p) => p.phase === 'listing');
    expect(listing.reduce((sum, p) => sum + Number(p.nodes), 0)).toBe(3_000);
    expect(listing.length).toBeGreaterThan(TOY_PARCELS);
  });
});

describe('a short question', () => {
  it('is answered while every worker is busy with a long search, which goes on from where it was', async () => {
    const long = await pool.ask(ada, 100_000_000, 'spin 15');
    await until('both workers are busy, past the first turn', async () => {
      const parcels = await pool.parcels(long.id);
      const cpuMs = parcels.reduce((sum, p) => sum + Number(p.cpu_ms), 0);
      return parcels.filter((p) => p.state === 'leased').length === 2 && cpuMs > 2_500;
    });
    const short = await pool.ask(ada, 2_000, 'quick');
    await pool.reaches(ada, short.id, ['settled'], 10); // a parcel of the long one would run for a minute
    await until('the long one has both workers again', async () => {
      const leased = (await pool.parcels(long.id)).filter((p) => p.state === 'leased');
      return leased.length === 2;
    });
    const parcels = await pool.parcels(long.id);
    expect(parcels.every((p) => p.crashes === 0)).toBe(true);
    expect(parcels.some((p) => p.attempt > 1 || (p.state === 'waiting' && Number(p.nodes) > 0))).toBe(true);
    await pool.store.questions.withdraw(ada, long.id);
  });
});

describe('its owner', () => {
  it('withdraws it within seconds, even from a thread that does not listen', async () => {
    const { id } = await pool.ask(ada, 100_000_000, 'deaf');
    await until('it runs', async () =>
      (await pool.parcels(id)).some((p) => p.phase === 'listing' && p.state === 'leased'),
    );
    await pool.store.questions.withdraw(ada, id);
    expect((await pool.view(ada, id)).state).toBe('withdrawn');
    // the workers are free again: another search runs to its end
    const next = await pool.ask(ada, 2_000);
    await pool.reaches(ada, next.id, ['settled'], 15);
    expect((await pool.view(ada, id)).state).toBe('withdrawn');
    expect(await nothingLeased(id)).toBe(true);
  });

  it('holds and resumes it; it goes on from where it was', async () => {
    const { id, document } = await pool.ask(ada, 20_000, 'spin 120');
    await until('it has got somewhere', async () => (await pool.parcels(id)).some((p) => Number(p.nodes) > 0));
    await pool.store.questions.hold(ada, id);
    await until(
      'it stands still',
      async () => (await nothingLeased(id)) && (await pool.view(ada, id)).state === 'held',
    );
    const nodes = async () => (await pool.parcels(id)).reduce((sum, p) => sum + Number(p.nodes), 0);
    const before = await nodes();
    const other = await pool.ask(ada, 2_000);
    await pool.reaches(ada, other.id, ['settled']);
    expect(await nodes()).toBe(before);
    await pool.store.questions.resume(ada, id);
    await pool.reaches(ada, id, ['settled', 'broken']);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    expect(await nodes()).toBe(20_000);
  });

  it('extends a spent budget, and it goes on to the same certificate', async () => {
    const { id, document } = await pool.ask(ada, 20_000, 'spin 120', 500);
    const spent = await pool.reaches(ada, id, ['spent', 'settled', 'broken']);
    expect(spent).toMatchObject({ state: 'spent', verdict: 'open', certificate: null });
    expect(spent.reason).toContain('budget');
    await until('nothing is leased', () => nothingLeased(id));
    await pool.store.questions.extend(ada, id, 600_000);
    await pool.reaches(ada, id, ['settled', 'broken']);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
    const listing = (await pool.parcels(id)).filter((p) => p.phase === 'listing');
    expect(listing.reduce((sum, p) => sum + Number(p.nodes), 0)).toBe(20_000);
  });
});

describe('a station', () => {
  it('finishes and stands by when the admin says so, and takes work again', async () => {
    const admin = { id: ada.id, role: 'admin' as const };
    const { id } = await pool.ask(ada, 20_000, 'spin 150');
    await until('it runs', async () => (await pool.parcels(id)).some((p) => p.state === 'leased'));
    const [row] = await pool.store.pool.stations();
    await pool.store.pool.standBy(admin, row!.id, true);
    await until('it stands by', async () => {
      const [now] = await pool.store.pool.stations();
      return now?.state === 'standing by' && (await nothingLeased(id));
    });
    expect((await pool.view(ada, id)).state).toBe('waiting');
    await pool.store.pool.standBy(admin, row!.id, false);
    await pool.reaches(ada, id, ['settled']);
  });

  it('leaves nothing leased when it is told to stop, and counts no crash', async () => {
    const { id, document } = await pool.ask(ada, 15_000, 'spin 150');
    await until('it runs', async () => (await pool.parcels(id)).some((p) => Number(p.nodes) > 0));
    station.signal('SIGTERM');
    expect(await station.gone()).toBe(0);
    const parcels = await pool.parcels(id);
    expect(parcels.filter((p) => p.state === 'leased')).toEqual([]);
    expect(parcels.filter((p) => p.crashes > 0)).toEqual([]);
    const [row] = await pool.sql<{ stopped_at: Date | null }>('select stopped_at from station');
    expect(row!.stopped_at).not.toBeNull();
    station = await pool.station('two', 2);
    await pool.reaches(ada, id, ['settled', 'broken']);
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
  });
});
