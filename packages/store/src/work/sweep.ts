/**
 * The safety net, run by every station now and then; a lock lets one at a time. Takes back leases that nobody refreshes,
 * ends searches whose budget is used up where no worker noticed, and wakes stations for work that lost its nudge.
 */
import type { Sql } from '../database.ts';
import type { LetterWriter, WorkStore } from '../door.ts';
import { countCrash } from './crash.ts';
import { spendIn } from './endings.ts';
import { lockSearch, settleDown } from './lease.ts';
import { changedState } from './progress.ts';
import type { WorkContext } from './work-context.ts';

type Options = Parameters<WorkStore['sweep']>[0];

interface Stale {
  id: string;
  attempt: number;
  search_id: string;
}

/**
 * A lease is as old as its last sign of life, but never older than the database's own start: while that was away nobody
 * could be heard.
 */
const STALE = `p.state = 'leased'
  and greatest(p.heartbeat_at, pg_postmaster_start_time()) < clock_timestamp() - $1 * interval '1 second'`;
/** The station fell silent without a goodbye. One that is heard has only forgotten the parcel: nobody's fault. */
const GONE = `not exists (select 1 from station t where t.id = p.station_id
  and (t.stopped_at is not null or greatest(t.heard_at, pg_postmaster_start_time()) >= clock_timestamp() - $1 * interval '1 second'))`;
/** Rows of stations that are long gone; keys of idempotency that nobody will send again. */
const TIDY = [
  `delete from station t where (t.stopped_at < now() - interval '1 day' or t.heard_at < now() - interval '30 days')
     and not exists (select 1 from parcel p where p.station_id = t.id and p.state = 'leased')`,
  `delete from idempotency where at < now() - interval '7 days'`,
  `delete from key_link where expires_at < now() - interval '30 days'`,
];

export async function sweep(context: WorkContext, options: Options): Promise<{ returned: number; nudged: number }> {
  const { database } = context;
  let returned = 0;
  for (const stale of await staleLeases(database, options.leaseSeconds))
    if (await takeBack(context, stale, options)) returned += 1;
  await endSpent(context, options.letters);
  for (const tidy of TIDY) await database.change(tidy);
  const nudged = await nudgeAgain(context);
  return { returned, nudged };
}

function staleLeases(sql: Sql, leaseSeconds: number): Promise<Stale[]> {
  return sql.query<Stale>(
    `select p.id, p.attempt, p.search_id from parcel p where ${STALE} order by p.search_id, p.id`,
    [leaseSeconds],
  );
}

async function takeBack(
  context: WorkContext,
  { id, attempt, search_id }: Stale,
  { leaseSeconds, letters }: Options,
): Promise<boolean> {
  return context.database.transaction(async (tx) => {
    await lockSearch(tx, search_id);
    // looked at again under the lock: another station may sweep, and the silent one may have been heard
    const [still] = await tx.query<{ gone: boolean }>(
      `select ${GONE} as gone from parcel p where p.id = $2 and p.attempt = $3 and ${STALE} for no key update of p`,
      [leaseSeconds, id, attempt],
    );
    if (still === undefined) return false;
    if (still.gone) {
      await countCrash(context, tx, { parcelId: id, attempt, searchId: search_id }, 'its station fell silent', letters);
    } else {
      await tx.change(
        `update parcel set state = 'waiting', station_id = null, yield_wanted = false, yield_for = null where id = $1`,
        [id],
      );
      await settleDown(tx, search_id);
      await changedState(tx, search_id);
    }
    return true;
  });
}

async function endSpent(context: WorkContext, letters: LetterWriter): Promise<void> {
  const used = await context.database.query<{ id: string }>(
    `select s.id from search s
     where s.state in ('waiting', 'searching') and s.cpu_ms >= s.budget_cpu_ms
       and not exists (select 1 from parcel p where p.search_id = s.id and p.state = 'leased') order by s.id`,
  );
  for (const { id } of used)
    await context.database.transaction((tx) => spendIn(context, tx, id, 'its budget of CPU time is used up', letters));
}

/** Work that could run and that nobody has taken: the number of searches with such parcels. A new day begins here. */
async function nudgeAgain({ database, nudges, poolTimeZone }: WorkContext): Promise<number> {
  return database.transaction(async (tx) => {
    const [waiting] = await tx.query<{ n: number }>(
      `select count(*)::int as n from search s
       join person o on o.id = s.person_id
       join allowance a on a.person_id = s.person_id
       left join usage_day u on u.person_id = s.person_id and u.day = (clock_timestamp() at time zone $1)::date
       where s.state in ('waiting', 'searching') and o.active and coalesce(u.cpu_ms, 0) < a.cpu_ms_per_day
         and exists (select 1 from parcel p where p.search_id = s.id and p.state = 'waiting')
         and (select count(*) from parcel p join search x on x.id = p.search_id
              where p.state = 'leased' and x.person_id = s.person_id) < a.workers`,
      [poolTimeZone],
    );
    if (waiting!.n > 0) await nudges.again(tx);
    return waiting!.n;
  });
}
