/** Why a search waits, and its place in turn. */
import type { WaitReason } from '@palmette/contracts';
import type { QuestionsContext } from './questions.ts';

/** A station that was not heard for this long does not count. */
export const NOT_HEARD = "interval '30 seconds'";

/**
 * People take turns, so a search that is the i-th of its owner waits for i − 1 of the owner's own and, from everybody
 * else who waits, for at most i of theirs if they are before the owner in turn, else for at most i − 1.
 */
const PLACE = `
  with open as (
    select s.id, s.person_id, row_number() over (partition by s.person_id order by s.had_quantum, s.served_at, s.created_at) as no
    from search s
    where s.state in ('waiting', 'searching')
      and exists (select 1 from parcel p where p.search_id = s.id and p.state = 'waiting')),
  people as (
    select o.person_id, count(*) as n, p.served_at,
           coalesce(u.cpu_ms, 0) < a.cpu_ms_per_day and a.workers > 0 and p.active as may
    from open o
    join person p on p.id = o.person_id
    join allowance a on a.person_id = o.person_id
    left join usage_day u on u.person_id = o.person_id and u.day = (now() at time zone $2)::date
    group by o.person_id, p.served_at, u.cpu_ms, a.cpu_ms_per_day, a.workers, p.active)
  select mine.no + (
      select coalesce(sum(least(other.n, case when (other.served_at, other.person_id) < (me.served_at, me.person_id)
                                              then mine.no else mine.no - 1 end)), 0)
      from people other where other.may and other.person_id <> me.person_id) as place,
    me.may,
    exists (select 1 from setting where name = 'pool held' and value = 'true')
      or not exists (select 1 from station where stopped_at is null and not stand_by
                     and heard_at > now() - ${NOT_HEARD}) as closed
  from open mine join people me on me.person_id = mine.person_id
  where mine.id = $1`;

export async function placeInTurn(
  { database, poolTimeZone }: QuestionsContext,
  searchId: string,
): Promise<{ place: number | null; reason: WaitReason } | null> {
  const [row] = await database.query<{ place: string; may: boolean; closed: boolean }>(PLACE, [searchId, poolTimeZone]);
  if (row === undefined) return null;
  if (row.closed) return { place: null, reason: 'pool' };
  if (!row.may) return { place: null, reason: 'allowance' };
  return { place: Number(row.place), reason: 'turn' };
}
