/**
 * What the station needs from whatever does the mathematics: jobs on threads that can be commanded and killed.
 * The real one is `@palmette/threads`; the tests of the station's loops run one that only counts.
 */
import type { Plan } from '@palmette/search';
import { openThreads, type Threads } from '@palmette/threads';

export interface Engine extends Threads {
  /** Revisions of plans that it can go on with. */
  readonly revisions: readonly number[];
}

/** The revision of the plans that this build runs; the type is raised with them. */
const PLAN_REVISION: Plan['revision'] = 2;

export function openEngine(workers: number): Engine {
  return { ...openThreads({ threads: workers }), revisions: [PLAN_REVISION] };
}
