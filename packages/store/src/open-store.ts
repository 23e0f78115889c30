/** Puts the store together. */
import { Database, schemaName } from './database.ts';
import type { Store, StoreOptions } from './door.ts';
import { openLetters } from './letters.ts';
import { schemaReady } from './migrate.ts';
import { openPeople } from './people/people.ts';
import { openPool } from './pool.ts';
import { openQuestions } from './questions/questions.ts';
import { Nudges } from './queue/nudges.ts';
import { pgBossNudges } from './queue/pg-boss-nudges.ts';
import { openStudies } from './studies/studies.ts';
import { openWork } from './work/work.ts';

/** POOL_TIME_ZONE is no zone that the database knows. */
export class TimeZoneFault extends Error {
  override readonly name = 'TimeZoneFault';
}

/** Waits for the schema that this build needs. @throws the driver's error if the database is away; SchemaTooNew; TimeZoneFault */
export async function openStore(options: StoreOptions): Promise<Store> {
  const settings = { ...options, schema: schemaName(options.schema) };
  const database = await Database.open(settings);
  try {
    await knownTimeZone(database, options.poolTimeZone);
    await schemaReady(database);
  } catch (error) {
    await database.close();
    throw error;
  }
  const queue = pgBossNudges(settings, database);
  const nudges = new Nudges(settings, queue);
  const { poolTimeZone, defaultAllowance, onError } = options;
  return {
    people: openPeople({ database, nudges, defaultAllowance, poolTimeZone }),
    studies: openStudies(database, nudges),
    questions: openQuestions({ database, nudges, poolTimeZone }),
    pool: openPool({ database, nudges, poolTimeZone, queue }),
    work: openWork({ database, nudges, poolTimeZone, onError }),
    letters: openLetters(database),
    async close() {
      await nudges.close();
      await database.close();
    },
  };
}

async function knownTimeZone(database: Database, zone: string): Promise<void> {
  const known = await database.query('select 1 from pg_timezone_names where name = $1', [zone]);
  if (known.length === 0)
    throw new TimeZoneFault(
      `POOL_TIME_ZONE: expected the name of a time zone, as Europe/Vienna, found ${JSON.stringify(zone)}`,
    );
}
