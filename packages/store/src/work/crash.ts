/**
 * Who is to blame for a crash. The first time any parcel of the process may have been it, so each runs alone from then
 * on; only crashes while alone count, and a new checkpoint forgives them all. Three, and the search is broken.
 */
import type { Transaction } from '../database.ts';
import type { Lease, LetterWriter } from '../door.ts';
import { breakIn } from './endings.ts';
import { fencedOff, lockSearch, settleDown } from './lease.ts';
import { changedState } from './progress.ts';
import type { WorkContext } from './work-context.ts';

const MOST_CRASHES_ALONE = 3;

/** @throws FencedOff */
export async function crashed(
  context: WorkContext,
  lease: Lease,
  reason: string,
  letters: LetterWriter,
): Promise<void> {
  await context.database.transaction(async (tx) => {
    await lockSearch(tx, lease.searchId);
    if (!(await countCrash(context, tx, lease, reason, letters))) throw fencedOff(lease);
    await context.nudges.notify(tx);
  });
}

/** The search is locked by the caller. False if the lease has ended already. */
export async function countCrash(
  context: WorkContext,
  tx: Transaction,
  lease: Pick<Lease, 'parcelId' | 'attempt' | 'searchId'>,
  reason: string,
  letters: LetterWriter,
): Promise<boolean> {
  const [parcel] = await tx.query<{ alone_crashes: number }>(
    `update parcel set state = 'waiting', station_id = null, yield_wanted = false, yield_for = null, crashes = crashes + 1,
       alone_crashes = alone_crashes + case when alone then 1 else 0 end, alone = true
     where id = $1 and attempt = $2 and state = 'leased' returning alone_crashes`,
    [lease.parcelId, lease.attempt],
  );
  if (parcel === undefined) return false;
  await tx.change('update search set had_quantum = true where id = $1 and not had_quantum', [lease.searchId]);
  await settleDown(tx, lease.searchId);
  await changedState(tx, lease.searchId);
  if (parcel.alone_crashes >= MOST_CRASHES_ALONE) {
    const words = `a worker that ran a part of this search, and nothing else, ended ${MOST_CRASHES_ALONE} times without getting on (${reason}). Ask again; if it breaks again, tell the admin`;
    await breakIn(context, tx, lease.searchId, words, letters);
  }
  return true;
}
