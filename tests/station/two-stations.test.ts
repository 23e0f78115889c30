/** Two stations on one database, with nothing else between them. */
import { afterAll, beforeAll, expect, it } from 'vitest';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { rightCertificate, startPool, type PoolUnderTest } from './pool-under-test.ts';

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

it('share one long parcel: the one that holds it cuts it for the worker that is idle in the other', async () => {
  const ada = await pool.person('ada');
  const stations = await Promise.all([pool.station('east', 1), pool.station('west', 1)]);
  const { id, document } = await pool.ask(ada, 3_000, 'lopsided; spin 1500');
  await pool.reaches(ada, id, ['settled', 'broken']);
  expect(await pool.certificate(id)).toBe(rightCertificate(document));
  expect(stations.some(({ log }) => log.some((line) => line.includes('"msg":"cut"')))).toBe(true);
  const listing = (await pool.parcels(id)).filter((p) => p.phase === 'listing');
  expect(listing.reduce((sum, p) => sum + Number(p.nodes), 0)).toBe(3_000);
});
