/** The database goes away in the middle of searches and comes back: what was computed meanwhile is written then. */
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { Client } from 'pg';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { rightCertificate, startPool, until, type PoolUnderTest } from '../station/pool-under-test.ts';

const root = fileURLToPath(new URL('../..', import.meta.url));
const SCHEMA = 'restarted';
let folder: string;
let databaseUrl: string;
let pool: PoolUnderTest;

/** A cluster of this file's own: no other test loses its database. */
function cluster(command: 'start' | 'stop'): string {
  return execFileSync('bash', ['docker-free-scripts/postgres.sh', command, folder], {
    cwd: root,
    env: { ...process.env, PALMETTE_PG_FAST: '1' },
    encoding: 'utf8',
  }).trim();
}

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'palmette-cluster-'));
  databaseUrl = cluster('start');
  const client = new Client({ connectionString: databaseUrl });
  await client.connect();
  await client.query(`create schema ${SCHEMA}`);
  await client.end();
  pool = await startPool({ databaseUrl, schema: SCHEMA });
});
afterAll(async () => {
  await pool?.close();
  cluster('stop');
  rmSync(folder, { recursive: true, force: true });
});

it('a restart of the database in the middle of a search costs nothing but time', async () => {
  const ada = await pool.person('ada');
  const station = await pool.station('patient', 2, { LEASE_SECONDS: '30' });
  const { id, document } = await pool.ask(ada, 16_000, 'spin 150');
  const nodesOf = async () =>
    (await pool.parcels(id)).reduce((sum, p) => sum + (p.phase === 'listing' ? Number(p.nodes) : 0), 0);
  await until('it has got somewhere', async () => (await nodesOf()) > 0);

  cluster('stop');
  await until('the station has noticed', () => station.log.some((line) => line.includes('the database is away')));
  expect(cluster('start')).toBe(databaseUrl);

  await pool.reaches(ada, id, ['settled', 'broken']);
  expect(await pool.certificate(id)).toBe(rightCertificate(document));
  expect(await nodesOf()).toBe(16_000);
  // nobody took the parcels back meanwhile: every one was claimed once
  expect((await pool.parcels(id)).filter((p) => p.phase === 'listing' && p.attempt > 1)).toEqual([]);
  expect(readdirSync(pool.folder).flatMap((spool) => readdirSync(join(pool.folder, spool)))).toEqual([]);

  // and the station still hears nudges
  const next = await pool.ask(ada, 2_000, 'quick');
  await pool.reaches(ada, next.id, ['settled'], 10);
});
