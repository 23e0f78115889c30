/**
 * The seam of the job queue. A nudge means "there is work" and names no parcel: the truth is in our own tables, so a
 * nudge that is lost, late or doubled does no harm.
 */
import type { Sql } from '../database.ts';

export interface NudgeQueue {
  /** Makes the queue's own tables; only the server's start does this, under the migration lock. */
  install(): Promise<void>;
  /** Puts a nudge into the transaction: it exists exactly if the transaction does. */
  send(tx: Sql): Promise<void>;
  /** Calls back for each batch of nudges, which are done as soon as they are taken. */
  take(call: () => void): Promise<void>;
  /** Nudges that nobody has taken yet. @throws where the queue does not answer */
  waiting(): Promise<number>;
  close(): Promise<void>;
}
