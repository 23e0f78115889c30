/** From choosing to listing, from stage to stage, from assembling to checking: the next cover, written exactly once. */
import { FencedOff, type WorkStore } from '../door.ts';
import { lockSearch, settleDown } from './lease.ts';
import { changedState, forgetRate } from './progress.ts';
import { storedShare } from './share.ts';
import type { WorkContext } from './work-context.ts';

type Next = Parameters<WorkStore['goOn']>[1];

/** A search in one of these can be given parcels; where it is held or spent they wait with it. */
const OPEN_STATES: readonly string[] = ['waiting', 'searching', 'held', 'spent'];
/** Parcels that are inserted in one statement. */
const BATCH = 500;

/** Ends the open choosing or assembling parcel. @throws FencedOff if there is none: somebody else has gone on */
export async function goOn({ database, nudges }: WorkContext, searchId: string, next: Next): Promise<void> {
  await database.transaction(async (tx) => {
    const search = await lockSearch(tx, searchId);
    const ended = OPEN_STATES.includes(search.state)
      ? await tx.change(
          `update parcel set state = 'done', share_done = 1, station_id = null, yield_wanted = false, yield_for = null
           where search_id = $1 and phase in ('choosing', 'assembling') and state in ('waiting', 'leased')`,
          [searchId],
        )
      : 0;
    if (ended === 0) throw new FencedOff(`search ${searchId} has gone on or has ended`);
    const { rank, method, plan, estimate } = next.facts;
    await tx.change(
      `update search set phase = $2, stage = $3, stage_results = $4, rank = coalesce(rank, $5), method = coalesce(method, $6),
         plan = coalesce(plan, $7), estimate = $8, method_revision = coalesce($9, method_revision), had_quantum = true
       where id = $1`,
      [
        searchId,
        next.phase,
        next.stage,
        next.stageResults,
        rank ?? null,
        method ?? null,
        plan ?? null,
        estimate ?? null,
        plan === undefined ? null : revisionOf(plan),
      ],
    );
    for (let at = 0; at < next.parcels.length; at += BATCH) {
      const batch = next.parcels
        .slice(at, at + BATCH)
        .map(({ from, to, share }) => ({ from, to, share: storedShare(share) }));
      await tx.change(
        `insert into parcel (search_id, phase, stage, from_address, to_address, share, method_revision)
         select s.id, $2, $3, ${address('p.from')}, case when p.to is not null then ${address('p.to')} end, p.share, s.method_revision
         from json_to_recordset($4::json) as p("from" json, "to" json, share float8), search s where s.id = $1`,
        [searchId, next.phase, next.stage, JSON.stringify(batch)],
      );
    }
    await settleDown(tx, searchId);
    await forgetRate(tx, searchId);
    await changedState(tx, searchId);
    await nudges.work(tx);
  });
}

/** PostgreSQL has no type for a list of lists of different lengths: addresses travel as JSON. */
function address(column: string): string {
  const quoted = column.replace(/\.(\w+)$/, '."$1"');
  return `array(select x::text::bigint from json_array_elements(${quoted}) with ordinality e(x, i) order by e.i)`;
}

/** The plan is opaque to the store but for the revision of its method: stations claim only what they can run. */
function revisionOf(plan: string): number {
  const { revision } = JSON.parse(plan) as { revision?: unknown };
  return typeof revision === 'number' ? revision : 1;
}
