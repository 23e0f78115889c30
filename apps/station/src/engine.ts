/**
 * What the station needs from whatever does the mathematics: jobs on threads that can be commanded and killed.
 * The real one is `@palmette/threads`; the tests of the station's loops run one that only counts.
 */
import { openThreads, type Threads } from '@palmette/threads';

export interface Engine extends Threads {
  /** Revisions of the search method that it can go on with. */
  readonly revisions: readonly number[];
}

/** The revision of the row method that this build runs (packages/certificate/FORMAT.md). */
const ROWS_REVISION = 1;

export function openEngine(workers: number): Engine {
  return { ...openThreads({ threads: workers }), revisions: [ROWS_REVISION] };
}
