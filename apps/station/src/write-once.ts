/**
 * One fenced write of a parcel, safe to repeat. When the connection broke in the middle nobody can say whether the
 * write arrived; the parcel's own count of nodes in the database tells, so nothing is counted twice.
 */
import { FencedOff, type Advice, type WorkStore } from '@palmette/store';
import type { Desk } from './desk.ts';
import { isOutage } from './patience.ts';
import type { Unwritten } from './write-spool.ts';

/**
 * Writes through outages; what cannot be written at once is kept in the spool meanwhile.
 * @throws FencedOff if the parcel is not ours any more; the outage itself if patience was given up
 */
export async function writeThrough(desk: Desk, unwritten: Unwritten, mayHaveArrived = false): Promise<Advice> {
  const { work, patience, spool } = desk;
  let uncertain = mayHaveArrived;
  let kept = mayHaveArrived;
  try {
    const advice = await patience.untilAnswered('the result of a parcel', async () => {
      try {
        if (uncertain && (await arrived(work, unwritten))) return await endOnly(work, unwritten);
        return await write(work, unwritten);
      } catch (error) {
        if (isOutage(error)) {
          uncertain = true;
          if (!kept) spool.keep(unwritten);
          kept = true;
        }
        throw error;
      }
    });
    if (kept) spool.drop(unwritten.lease);
    return advice;
  } catch (error) {
    if (kept && !isOutage(error)) spool.drop(unwritten.lease);
    throw error;
  }
}

async function write(work: WorkStore, { lease, write, ending }: Unwritten): Promise<Advice> {
  switch (ending) {
    case 'running':
      return work.checkpoint(lease, write);
    case 'released':
      await work.checkpoint(lease, write);
      await work.release(lease);
      return 'go on';
    case 'done':
      await work.finish(lease, write, null);
      return 'go on';
    case 'found':
      await work.witness(lease, write);
      return 'go on';
  }
}

/** The write is in the database; `done` and `found` were part of it, a release is not. */
async function endOnly(work: WorkStore, { lease, ending }: Unwritten): Promise<Advice> {
  if (ending === 'released') await work.release(lease);
  return 'go on';
}

/** @throws FencedOff if somebody else has written since */
async function arrived(work: WorkStore, { lease, write }: Unwritten): Promise<boolean> {
  const parcels = await work.parcels(lease.searchId, lease.phase, lease.stage);
  const now = parcels.find((p) => p.from.length === lease.from.length && p.from.every((x, i) => x === lease.from[i]));
  if (now?.nodes === lease.nodes) return false;
  if (now?.nodes === lease.nodes + write.nodes) return true;
  throw new FencedOff('the parcel has gone on without this station');
}
