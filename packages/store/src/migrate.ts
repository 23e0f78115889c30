/**
 * Brings the database to the schema of this build. Only the server's start does this, under an advisory lock, so two
 * servers that start at once do it once. Everybody else waits for the schema number they need.
 */
import { Client } from 'pg';
import { connectionOptions, Database, schemaName, type Sql } from './database.ts';
import type { StoreOptions } from './door.ts';
import { SCHEMA_NUMBER } from './migrations/index.ts';
import { pgBossNudges } from './queue/pg-boss-nudges.ts';

const LOOK_EVERY_MS = 250;

/** The database belongs to a newer build; this one must not touch it. */
export class SchemaTooNew extends Error {
  override readonly name = 'SchemaTooNew';
}

/** @throws SchemaTooNew */
export async function migrate(options: StoreOptions): Promise<void> {
  const settings = { ...options, schema: schemaName(options.schema) };
  const lock = new Client(connectionOptions(settings));
  lock.on('error', options.onError);
  await lock.connect();
  try {
    await lock.query('select pg_advisory_lock(hashtext($1))', [`${settings.schema} migration`]);
    await lock.query(`create schema if not exists ${settings.schema}`);
    const database = await Database.open(settings);
    try {
      await refuseNewer(database);
      await database.source.runMigrations({ transaction: 'all' });
      await pgBossNudges(settings, database).install();
    } finally {
      await database.close();
    }
  } finally {
    await lock.end();
  }
}

/** Waits until the schema is the one that this build needs. @throws SchemaTooNew */
export async function schemaReady(sql: Sql): Promise<void> {
  for (;;) {
    if ((await refuseNewer(sql)) === SCHEMA_NUMBER) return;
    await new Promise((resolve) => setTimeout(resolve, LOOK_EVERY_MS));
  }
}

async function refuseNewer(sql: Sql): Promise<number> {
  const number = await schemaNumber(sql);
  if (number > SCHEMA_NUMBER)
    throw new SchemaTooNew(`the database has schema ${number}, this build knows ${SCHEMA_NUMBER}: use the newer build`);
  return number;
}

async function schemaNumber(sql: Sql): Promise<number> {
  const [table] = await sql.query<{ there: boolean }>("select to_regclass('migration') is not null as there");
  if (!table!.there) return 0;
  const [row] = await sql.query<{ n: number }>('select count(*)::int as n from migration');
  return row!.n;
}
