/** The script that keeps a private cluster: safe to run twice, after a crash, and with its port taken. */
import { execFile } from 'node:child_process';
import { chmodSync, mkdirSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { fileURLToPath } from 'node:url';
import { afterAll, describe, expect, it } from 'vitest';
import { Client } from 'pg';

const run = promisify(execFile);
const root = fileURLToPath(new URL('../..', import.meta.url));
/** Under a parent that only its owner may enter, as home folders are. */
const parent = mkdtempSync(join(tmpdir(), 'palmette-postgres-'));
chmodSync(parent, 0o700);
const folder = join(parent, 'cluster');
mkdirSync(folder);

async function script(command: string): Promise<string> {
  const { stdout } = await run('bash', ['docker-free-scripts/postgres.sh', command, folder], {
    cwd: root,
    env: { ...process.env, PALMETTE_PG_FAST: '1', PALMETTE_PG_PORT: '' },
  });
  return stdout.trim();
}

async function answer(databaseUrl: string): Promise<unknown> {
  const client = new Client({ connectionString: databaseUrl });
  client.on('error', () => {}); // it is killed below
  await client.connect();
  try {
    await client.query('create table if not exists kept (n integer)');
    await client.query('insert into kept values (1)');
    return (await client.query('select count(*)::int as n, current_database() as name from kept')).rows[0];
  } finally {
    await client.end();
  }
}

afterAll(async () => {
  await script('stop');
  rmSync(parent, { recursive: true, force: true });
});

describe('the private cluster', () => {
  let url: string;

  it('is made once by two starts at the same moment', async () => {
    const urls = await Promise.all([script('start'), script('start')]);
    expect(urls[0]).toMatch(/^postgres:\/\/palmette:[0-9a-f]{48}@127\.0\.0\.1:\d+\/palmette$/);
    expect(urls[1]).toBe(urls[0]);
    url = urls[0]!;
    expect(await answer(url)).toEqual({ n: 1, name: 'palmette' });
  });

  it('comes back after it was killed, with what was in it', async () => {
    process.kill(Number(readFileSync(join(folder, 'data/postmaster.pid'), 'utf8').split('\n')[0]), 'SIGKILL');
    expect(await script('start')).toBe(url);
    expect(await answer(url)).toEqual({ n: 2, name: 'palmette' });
  });

  it('takes another port when its own is taken, and remembers that', async () => {
    await script('stop');
    await script('stop'); // twice does no harm
    const taken = createServer().listen(Number(new URL(url).port), '127.0.0.1');
    const moved = await script('start');
    expect(new URL(moved).port).not.toBe(new URL(url).port);
    expect(await answer(moved)).toEqual({ n: 3, name: 'palmette' });
    taken.close();
    await script('stop');
    expect(await script('start')).toBe(moved);
  });

  it('lets nobody in without the password', async () => {
    const without = new URL(await script('start'));
    without.password = 'guessed';
    await expect(answer(without.toString())).rejects.toMatchObject({ code: '28P01' });
  });
});
