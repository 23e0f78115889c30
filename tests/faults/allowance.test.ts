/** The worker cap of a person holds at every instant across stations, and holds nobody else up. */
import { afterAll, beforeAll, expect, it } from 'vitest';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { rightCertificate, startPool, until, type PoolUnderTest } from '../station/pool-under-test.ts';

let database: TestDatabase;
let pool: PoolUnderTest;

beforeAll(async () => {
  database = await testDatabase();
  pool = await startPool(database);
});
afterAll(async () => {
  await pool?.close();
  await database?.drop();
});

it('two searches of one person capped at one worker never run at once, while another person’s go on', async () => {
  const capped = await pool.person('capped', 1);
  const free = await pool.person('free', 8);
  await Promise.all([pool.station('east', 2), pool.station('west', 2)]);
  const first = await pool.ask(capped, 6_000, 'spin 150');
  const second = await pool.ask(capped, 6_000, 'spin 150');
  const others = [await pool.ask(free, 10_000, 'spin 150'), await pool.ask(free, 10_000, 'spin 150')];

  const seen = { capped: 0, free: 0, samples: 0, stations: new Set<string>() };
  await until('all four are settled', async () => {
    const leased = await pool.sql<{ person_id: string; station_id: string }>(
      `select s.person_id, p.station_id from parcel p join search s on s.id = p.search_id where p.state = 'leased'`,
    );
    const workers = (person: string) => leased.filter((lease) => lease.person_id === person).length;
    seen.samples += 1;
    seen.capped = Math.max(seen.capped, workers(capped.id));
    seen.free = Math.max(seen.free, workers(free.id));
    for (const lease of leased) seen.stations.add(lease.station_id);
    const states = await Promise.all([
      ...[first, second].map(({ id }) => pool.view(capped, id)),
      ...others.map(({ id }) => pool.view(free, id)),
    ]);
    return states.every(({ state }) => state === 'settled');
  });
  expect(seen.samples).toBeGreaterThan(10);
  expect(seen.capped).toBe(1);
  expect(seen.free).toBeGreaterThan(1);
  expect(seen.stations.size).toBe(2);
  for (const { id, document } of [first, second, ...others])
    expect(await pool.certificate(id)).toBe(rightCertificate(document));
});
