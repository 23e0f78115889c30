/** The life of a parcel in this station: choose → list → assemble → check → conclude. */
import { FencedOff } from '@palmette/store';
import { assemble } from './assemble-parcel.ts';
import { choose } from './choose-parcel.ts';
import { conclude } from './conclude-parcel.ts';
import type { Desk } from './desk.ts';
import { breakDown, crash, giveBack, spend } from './endings.ts';
import { Ended, type HeldParcel } from './held-parcel.ts';
import { check, list } from './interval-parcel.ts';
import { isOutage } from './patience.ts';

/** Runs a parcel to its end and writes how it ended. Never throws: whatever happens, the parcel is let go. */
export async function runParcel(held: HeldParcel, desk: Desk): Promise<void> {
  try {
    await run(held, desk);
  } catch (error) {
    await letGo(held, desk, error);
  }
}

async function run(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  // handed out only so that somebody ends the search; the store takes the parcel back with it
  if (lease.budgetLeftMs !== null && lease.budgetLeftMs <= 0) return spend(held, desk, 'budget');
  switch (lease.phase) {
    case 'choosing':
      return choose(held, desk);
    case 'listing':
      return list(held, desk);
    case 'assembling':
      return (await isChecked(held, desk)) ? conclude(held, desk) : assemble(held, desk);
    case 'checking':
      return check(held, desk);
  }
}

/** Assembling comes twice in a search whose check is long: before the check's parcels, and after them. */
async function isChecked({ lease }: HeldParcel, { work, patience }: Desk): Promise<boolean> {
  const parcels = await patience.untilAnswered('the parcels of the check', () =>
    work.parcels(lease.searchId, 'checking', lease.stage),
  );
  return parcels.length > 0;
}

async function letGo(held: HeldParcel, desk: Desk, error: unknown): Promise<void> {
  const { lease } = held;
  const about = { parcel: lease.parcelId, search: lease.searchId, phase: lease.phase, fault: String(error) };
  try {
    if (held.lost) throw new FencedOff('the parcel was lost while it ran');
    if (error instanceof FencedOff) throw error;
    if (isOutage(error)) {
      desk.log.warn(about, 'the database stayed away; the parcel goes on from its last checkpoint');
    } else if (error instanceof Ended) {
      await giveBack(held, desk);
    } else if (error instanceof Error && error.name === 'MethodsDisagree') {
      // a thread's error keeps its name, not its class; trying again cannot mend it
      await breakDown(held, desk, error.message);
    } else {
      desk.log.error(about, 'the parcel ended with a fault');
      await crash(held, desk, error instanceof Error ? error.message : String(error));
    }
  } catch (second) {
    if (second instanceof FencedOff) desk.log.info(about, 'the parcel is not ours any more');
    else
      desk.log.error({ ...about, second: String(second) }, 'the parcel could not be let go; the sweep takes it back');
  }
}
