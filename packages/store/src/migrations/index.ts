/** All migrations in order; their number is the schema number. They only add; removal comes a release later. */
import { First } from './first.ts';
import { ToSpend } from './to-spend.ts';

export const MIGRATIONS = [First, ToSpend] as const;
export const SCHEMA_NUMBER = MIGRATIONS.length;
