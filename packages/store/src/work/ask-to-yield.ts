/**
 * A new search waits, and all workers are busy or its owner is at the cap: one running parcel is asked to yield, the
 * owner's own if there is one, else one of the person who runs most. One at a time for each person who waits.
 */
import type { Transaction } from '../database.ts';
import { NOT_HEARD } from '../questions/place.ts';
import type { Candidate } from './claim.ts';

/** Parcels of a tree leave checkpoints and can yield; the oldest lease goes first. $1 the person, $2 only their own. */
const VICTIM = `
  with running as (
    select p.id, p.leased_at, s.person_id, count(*) over (partition by s.person_id) as n
    from parcel p join search s on s.id = p.search_id
    where p.state = 'leased' and p.phase in ('listing', 'checking') and not p.yield_wanted and s.had_quantum)
  update parcel set yield_wanted = true, yield_for = $1
  where id = (select id from running where person_id = $1 or not $2
              order by person_id = $1 desc, n desc, leased_at, id limit 1)`;

/** `asked`, or in how many milliseconds somebody may jump who may not yet, or null. */
export async function askToYield(tx: Transaction, candidates: readonly Candidate[]): Promise<'asked' | number | null> {
  const waiting = candidates.filter((c) => c.fresh && c.workers > 0);
  if (waiting.length === 0) return null;
  const poolIsFull = await allBusy(tx);
  let soonest: number | null = null;
  let asked = false;
  for (const { person_id, running, workers, jump_in_ms } of waiting) {
    const atCap = running >= workers;
    if (!atCap && !poolIsFull) continue; // a free worker somewhere else takes it
    if (jump_in_ms > 0) {
      soonest = Math.min(soonest ?? Number.POSITIVE_INFINITY, jump_in_ms);
      continue;
    }
    const pending = await tx.query(`select 1 from parcel where state = 'leased' and yield_for = $1 limit 1`, [
      person_id,
    ]);
    if (pending.length === 0) asked = (await tx.change(VICTIM, [person_id, atCap])) > 0 || asked;
  }
  return asked ? 'asked' : soonest === null ? null : Math.ceil(soonest) + 1;
}

async function allBusy(tx: Transaction): Promise<boolean> {
  const [pool] = await tx.query<{ full: boolean }>(
    `select coalesce(bool_and(busy >= workers), true) as full from (
       select t.workers, (select count(*) from parcel p where p.station_id = t.id and p.state = 'leased') as busy
       from station t
       where t.stopped_at is null and not t.stand_by and t.alone_for is null and t.heard_at > now() - ${NOT_HEARD}) s`,
  );
  return pool!.full;
}
