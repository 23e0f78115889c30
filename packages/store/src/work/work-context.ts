import type { Database } from '../database.ts';
import type { Nudges } from '../queue/nudges.ts';

/** What every step of the queue needs at hand. */
export interface WorkContext {
  readonly database: Database;
  readonly nudges: Nudges;
  readonly poolTimeZone: string;
  readonly onError: (error: unknown) => void;
}
