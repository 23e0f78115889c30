/**
 * Giving away the rest of a long parcel. The thread proposes where and waits; only when the database has recorded both
 * pieces does it go on with the first. If nobody can say whether the cut was recorded, the thread is ended and the parcel
 * goes on from its checkpoint, with whatever end the database has for it.
 */
import { FencedOff } from '@palmette/store';
import type { CutMessage, Job, RunningJob } from '@palmette/threads';
import type { Desk } from './desk.ts';
import type { HeldParcel } from './held-parcel.ts';

/** A thread waits 30 s for the answer and then goes on with all of it; an answer near that is no answer. */
const ANSWER_IN_MS = 20_000;
/** Not cut before it has run this long, nor if less than this is left by its own pace. */
const SETTLED_AFTER_MS = 1_000;
const WORTH_MS = 2_000;

export async function answerCut(
  held: HeldParcel,
  desk: Desk,
  { mid, shareKept }: CutMessage,
  running: Pick<RunningJob<Job>, 'answerCut'>,
): Promise<void> {
  held.pace = { sinceMs: performance.now(), from: null, done: 0 };
  if (mid === null) return;
  const asked = performance.now();
  try {
    const { to } = await desk.work.recut(held.lease, mid, shareKept);
    if (performance.now() - asked > ANSWER_IN_MS) return held.kill();
    held.lease = { ...held.lease, to };
    running.answerCut(true);
    desk.log.info({ parcel: held.lease.parcelId, mid, shareKept }, 'cut');
  } catch (error) {
    if (error instanceof FencedOff) return held.lose();
    desk.log.warn({ parcel: held.lease.parcelId, fault: String(error) }, 'a cut whose recording is not known');
    held.kill();
  }
}

/** The parcel of which a cut helps most: the one with most left to do by its own pace; null if none is long. */
export function longest(parcels: Iterable<HeldParcel>, nowMs: number): HeldParcel | null {
  let best: { held: HeldParcel; leftMs: number } | null = null;
  for (const held of parcels) {
    if (!held.canBeCut) continue;
    const leftMs = timeLeftMs(held.pace, nowMs);
    if (leftMs > WORTH_MS && leftMs > (best?.leftMs ?? 0)) best = { held, leftMs };
  }
  return best?.held ?? null;
}

function timeLeftMs(pace: HeldParcel['pace'], nowMs: number): number {
  const ranMs = nowMs - pace.sinceMs;
  if (pace.from === null || ranMs < SETTLED_AFTER_MS) return 0;
  const gained = pace.done - pace.from;
  return gained <= 0 ? Number.POSITIVE_INFINITY : (ranMs * (1 - pace.done)) / gained;
}
