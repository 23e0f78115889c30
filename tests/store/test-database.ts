/**
 * A schema of its own for each test file, on the cluster of TEST_DATABASE_URL or on one that the script starts in
 * .palmette/test-postgres. A file with a failed test keeps its schema, so that one can look at it.
 */
import { execFileSync } from 'node:child_process';
import { randomBytes } from 'node:crypto';
import { fileURLToPath } from 'node:url';
import { Client } from 'pg';
import { afterEach } from 'vitest';

export interface TestDatabase {
  readonly databaseUrl: string;
  readonly schema: string;
  /** Drops the schema, and the queue's beside it, if every test of the file passed so far. */
  drop(): Promise<void>;
}

let failed = false;
afterEach(({ task }) => {
  failed ||= task.result?.state === 'fail';
});

export async function testDatabase(): Promise<TestDatabase> {
  const databaseUrl = process.env.TEST_DATABASE_URL || startedByScript();
  const schema = `test_${randomBytes(6).toString('hex')}`;
  await query(databaseUrl, `create schema ${schema}`);
  return {
    databaseUrl,
    schema,
    async drop() {
      if (failed) return;
      await query(
        databaseUrl,
        `drop schema if exists ${schema} cascade; drop schema if exists ${schema}_queue cascade`,
      );
    },
  };
}

function startedByScript(): string {
  return execFileSync('bash', ['docker-free-scripts/postgres.sh', 'start', '.palmette/test-postgres'], {
    cwd: fileURLToPath(new URL('../..', import.meta.url)),
    env: { ...process.env, PALMETTE_PG_FAST: '1' },
    encoding: 'utf8',
  }).trim();
}

async function query(databaseUrl: string, sql: string): Promise<void> {
  const client = new Client({ connectionString: databaseUrl, application_name: 'palmette test' });
  await client.connect();
  try {
    await client.query(sql);
  } finally {
    await client.end();
  }
}
