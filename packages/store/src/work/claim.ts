/**
 * The next parcel in fair turn. People take turns (the one who was served longest ago is next); within a person the
 * searches do. A search that has had no quantum yet jumps the turn, so that a short question is answered at once; what
 * that cost, the others get back before its owner may jump again. All of it under one lock: see claim-lock.ts.
 */
import type { Transaction } from '../database.ts';
import type { Lease, WorkStore } from '../door.ts';
import { prepareAlone, reserveForAlone, type Reserved } from './alone.ts';
import { askToYield } from './ask-to-yield.ts';
import { lockClaims } from './claim-lock.ts';
import { readLease, type LeaseRow } from './lease.ts';
import { changedState } from './progress.ts';
import type { WorkContext } from './work-context.ts';

export type ClaimOptions = Parameters<WorkStore['claim']>[1];

/** A person with waiting work and allowance left, and the search of theirs whose turn it is. */
export interface Candidate {
  person_id: string;
  search_id: string;
  fresh: boolean;
  /** Milliseconds until the person may jump again; 0 or less: now. */
  jump_in_ms: number;
  only_alone: boolean;
  running: number;
  workers: number;
}

/** $1 revisions, $2 time zone. */
const CANDIDATES = `
  with running as (
    select s.person_id, count(*)::int as n from parcel p join search s on s.id = p.search_id
    where p.state = 'leased' group by s.person_id)
  select p.id as person_id, c.search_id, c.fresh, c.only_alone, a.workers, coalesce(r.n, 0) as running,
    case when p.jump_after = '-infinity' then 0
         else extract(epoch from p.jump_after - clock_timestamp()) * 1000 end::float8 as jump_in_ms
  from person p
  join allowance a on a.person_id = p.id
  cross join lateral (
    select s.id as search_id, not s.had_quantum as fresh,
      not exists (select 1 from parcel w where w.search_id = s.id and w.state = 'waiting' and not w.alone) as only_alone
    from search s
    where s.person_id = p.id and s.state in ('waiting', 'searching')
      and exists (select 1 from parcel w where w.search_id = s.id and w.state = 'waiting'
                  and (w.phase = 'choosing' or w.method_revision = any($1::int[])))
      and (s.budget_cpu_ms is null or s.cpu_ms < s.budget_cpu_ms
           or not exists (select 1 from parcel l where l.search_id = s.id and l.state = 'leased'))
    order by s.had_quantum, s.served_at, s.created_at, s.id limit 1) c
  left join running r on r.person_id = p.id
  left join usage_day u on u.person_id = p.id and u.day = (clock_timestamp() at time zone $2)::date
  where p.active and coalesce(u.cpu_ms, 0) < a.cpu_ms_per_day
  order by c.fresh and p.jump_after <= clock_timestamp() desc, p.served_at, p.id`;

const NEXT_PARCEL = `
  select id from parcel
  where search_id = $1 and state = 'waiting' and (phase = 'choosing' or method_revision = any($2::int[]))
    and (not alone or $3)
  order by id = $4::bigint desc nulls last, alone, share_done > 0 desc, from_address, id limit 1 for no key update`;

/** Tries again when a search that was looked at has ended by the time its row is locked. */
const MOST_TRIES = 5;

export async function claim(context: WorkContext, stationId: string, options: ClaimOptions): Promise<Lease | null> {
  const { database, nudges, poolTimeZone } = context;
  return database.transaction(async (tx) => {
    await lockClaims(tx, database.options.schema);
    const station = await openStation(tx, stationId);
    if (station === null) return null;
    const runsAlone = options.canRunAlone && station.leases === 0;
    const reserved = await prepareAlone(tx, stationId, runsAlone);
    if (reserved === 'emptying' || station.holds_alone) return null;

    const skipped = new Set<string>();
    let candidates: Candidate[] = [];
    for (let tries = 0; tries < MOST_TRIES; tries += 1) {
      candidates = await tx.query<Candidate>(CANDIDATES, [options.revisions, poolTimeZone]);
      const next = options.freeWorkers < 1 ? undefined : inTurn(candidates, skipped, reserved);
      if (next === undefined) break;
      if (next.only_alone && !runsAlone) {
        if (await reserveForAlone(tx, stationId, next.search_id)) {
          await nudges.notify(tx);
          return null;
        }
        skipped.add(next.person_id); // another station empties itself for it
        continue;
      }
      const lease = await leaseFrom(tx, stationId, next.search_id, [
        options.revisions,
        runsAlone,
        reserved?.parcelId ?? null,
      ]);
      if (lease !== null) return lease;
    }
    const waitMs = await askToYield(tx, candidates);
    if (waitMs === 'asked') await nudges.notify(tx);
    else if (waitMs !== null) nudges.later(waitMs);
    return null;
  });
}

/** Null where the station may not begin anything. */
async function openStation(
  tx: Transaction,
  stationId: string,
): Promise<{ leases: number; holds_alone: boolean } | null> {
  const [station] = await tx.query<{ leases: number; holds_alone: boolean; closed: boolean }>(
    `select (select count(*)::int from parcel where station_id = s.id and state = 'leased') as leases,
       exists (select 1 from parcel where station_id = s.id and state = 'leased' and alone) as holds_alone,
       s.stand_by or s.stopped_at is not null
         or exists (select 1 from setting where name = 'pool held' and value = 'true') as closed
     from station s where s.id = $1`,
    [stationId],
  );
  return station === undefined || station.closed ? null : station;
}

/** The first who is below the cap; where the station was emptied for one search, only that one. */
function inTurn(
  candidates: readonly Candidate[],
  skipped: ReadonlySet<string>,
  reserved: Reserved | null,
): Candidate | undefined {
  const may = candidates.filter((c) => c.running < c.workers && !skipped.has(c.person_id));
  return (reserved && may.find((c) => c.search_id === reserved.searchId)) ?? may[0];
}

async function leaseFrom(
  tx: Transaction,
  stationId: string,
  searchId: string,
  which: readonly [revisions: readonly number[], runsAlone: boolean, first: string | null],
): Promise<Lease | null> {
  const [search] = await tx.query<{ state: string }>('select state from search where id = $1 for no key update', [
    searchId,
  ]);
  if (search?.state !== 'waiting' && search?.state !== 'searching') return null;
  const [parcel] = await tx.query<{ id: string }>(NEXT_PARCEL, [searchId, ...which]);
  if (parcel === undefined) return null;
  await tx.change(
    `update parcel set state = 'leased', attempt = attempt + 1, station_id = $2, leased_at = clock_timestamp(),
       heartbeat_at = clock_timestamp(), yield_wanted = false, yield_for = null,
       to_spend = (select coalesce(cpu_ms >= budget_cpu_ms, false) from search where id = search_id)
     where id = $1`,
    [parcel.id, stationId],
  );
  const [row] = await tx.query<LeaseRow>(
    `update search s set state = 'searching', phase = p.phase, reason = null, served_at = clock_timestamp(),
       started_at = coalesce(s.started_at, clock_timestamp())
     from parcel p, question q
     where s.id = $1 and p.id = $2 and q.id = s.question_id
     returning p.id as parcel_id, p.attempt, s.id as search_id, s.person_id, p.phase, p.stage,
       to_json(p.from_address) as from_address, to_json(p.to_address) as to_address, p.checkpoint, p.checkpoint_sha256,
       p.chunks, p.alone, p.cpu_ms, p.nodes, p.orbits, q.document, s.plan, s.stage_results, s.budget_cpu_ms,
       s.cpu_ms as search_cpu_ms`,
    [searchId, parcel.id],
  );
  await changedState(tx, searchId);
  await tx.change('update person set served_at = clock_timestamp() where id = $1', [row!.person_id]);
  return readLease(tx, row!);
}
