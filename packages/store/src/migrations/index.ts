/** All migrations in order; their number is the schema number. They only add; removal comes a release later. */
import { First } from './first.ts';

export const MIGRATIONS = [First] as const;
export const SCHEMA_NUMBER = MIGRATIONS.length;
