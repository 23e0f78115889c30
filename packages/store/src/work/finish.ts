/**
 * How a lease ends without a fault: given back, cut, done. Whoever ends the last parcel of a stage puts the parcel that
 * assembles it into the same transaction, so a crash right after strands nothing.
 */
import type { Transaction } from '../database.ts';
import type { CheckpointWrite, Lease } from '../door.ts';
import { packChunks, writeCheckpoint } from './checkpoint.ts';
import { fencedOff, lockSearch, settleDown, type LockedSearch } from './lease.ts';
import { changedState } from './progress.ts';
import { storedPart, storedShare } from './share.ts';
import type { WorkContext } from './work-context.ts';

/** Back to waiting with its last checkpoint. @throws FencedOff */
export async function release({ database, nudges }: WorkContext, lease: Lease): Promise<void> {
  await database.transaction(async (tx) => {
    const search = await lockSearch(tx, lease.searchId);
    const released = await tx.change(
      `update parcel set state = 'waiting', station_id = null, yield_wanted = false, yield_for = null
       where id = $1 and attempt = $2 and state = 'leased'`,
      [lease.parcelId, lease.attempt],
    );
    if (released === 0) throw fencedOff(lease);
    if (lease.phase !== 'choosing')
      await tx.change('update search set had_quantum = true where id = $1 and not had_quantum', [search.id]);
    await settleDown(tx, search.id);
    await changedState(tx, search.id);
    await nudges.notify(tx);
  });
}

export class CutFault extends Error {
  override readonly name = 'CutFault';
}

/** Shortens the parcel to [from, mid) and inserts [mid, to): the cover still abuts. @throws FencedOff, CutFault */
export async function recut(
  { database, nudges }: WorkContext,
  lease: Lease,
  mid: readonly number[],
  shareKept: number,
): Promise<Lease> {
  const kept = storedPart(shareKept);
  await database.transaction(async (tx) => {
    const search = await lockSearch(tx, lease.searchId);
    const [piece] = await tx.query<{
      to_address: number[] | null;
      share: number;
      share_done: number;
      method_revision: number;
      inside: boolean;
    }>(
      `select to_json(to_address) as to_address, share, share_done, method_revision,
         from_address < $3::bigint[] and (to_address is null or $3::bigint[] < to_address) as inside
       from parcel where id = $1 and attempt = $2 and state = 'leased' for no key update`,
      [lease.parcelId, lease.attempt, mid],
    );
    if (piece === undefined) throw fencedOff(lease);
    if (!piece.inside) throw new CutFault(`a cut at ${JSON.stringify(mid)} lies outside the parcel`);
    const done = kept > 0 ? storedPart(piece.share_done / kept) : 1;
    await tx.change('update parcel set to_address = $2, share = $3, share_done = $4 where id = $1', [
      lease.parcelId,
      mid,
      storedShare(piece.share * kept),
      done,
    ]);
    const rest = storedShare(piece.share * (1 - kept));
    await tx.change(
      `insert into parcel (search_id, phase, stage, from_address, to_address, share, method_revision)
       values ($1, $2, $3, $4, $5, $6, $7)`,
      [search.id, lease.phase, lease.stage, mid, piece.to_address, rest, piece.method_revision],
    );
    await changedState(tx, search.id);
    await nudges.notify(tx);
  });
  return { ...lease, to: mid };
}

/** The parcel is done. True to exactly one: to the one that ended the last of the stage. @throws FencedOff */
export async function finish(
  context: WorkContext,
  lease: Lease,
  write: CheckpointWrite,
  result: string | null,
): Promise<boolean> {
  return endParcel(context, lease, write, async (tx, search) => {
    await tx.change(`update parcel set result = $2 where id = $1`, [lease.parcelId, result]);
    const [open] = await tx.query(
      `select 1 from parcel where search_id = $1 and phase = $2 and stage = $3 and state in ('waiting', 'leased') limit 1`,
      [search.id, lease.phase, lease.stage],
    );
    return open === undefined;
  });
}

/** The first witness of a scope-one search: the other parcels of the stage are not needed. @throws FencedOff */
export async function witness(context: WorkContext, lease: Lease, write: CheckpointWrite): Promise<boolean> {
  return endParcel(context, lease, write, async (tx, search) => {
    await tx.change(
      `update parcel set state = 'unneeded', station_id = null
       where search_id = $1 and phase = $2 and stage = $3 and state in ('waiting', 'leased')`,
      [search.id, lease.phase, lease.stage],
    );
    return true;
  });
}

async function endParcel(
  context: WorkContext,
  lease: Lease,
  write: CheckpointWrite,
  endsStage: (tx: Transaction, search: LockedSearch) => Promise<boolean>,
): Promise<boolean> {
  const chunks = await packChunks(write);
  return context.database.transaction(async (tx) => {
    const search = await lockSearch(tx, lease.searchId);
    await writeCheckpoint(context, tx, search, lease, { ...write, shareDone: 1 }, chunks);
    await tx.change(
      `update parcel set state = 'done', station_id = null, yield_wanted = false, yield_for = null where id = $1`,
      [lease.parcelId],
    );
    const last = await endsStage(tx, search);
    if (last) await beginAssembling(context, tx, search, lease);
    await settleDown(tx, search.id);
    await changedState(tx, search.id);
    if (!last) await context.nudges.notify(tx);
    return last;
  });
}

/** Only a tree has something to put together; a station that ends another phase by `finish` goes on by itself. */
async function beginAssembling(
  context: WorkContext,
  tx: Transaction,
  search: LockedSearch,
  lease: Lease,
): Promise<void> {
  if (lease.phase !== 'listing' && lease.phase !== 'checking') return;
  await tx.change(
    `insert into parcel (search_id, phase, stage, from_address, method_revision)
     select $1, 'assembling', $2, '{}', method_revision from search where id = $1`,
    [search.id, lease.stage],
  );
  await tx.change(`update search set phase = 'assembling' where id = $1`, [search.id]);
  await context.nudges.work(tx);
}
