import type { Pool } from '@palmette/contracts';
import { NOT_HEARD } from './questions/place.ts';
import type { QuestionsContext } from './questions/questions.ts';
import { SEEN_QUESTIONS, SUMMARY_COLUMNS, summary, type SummaryRow } from './questions/summary.ts';

interface PoolRow {
  workers: number;
  busy: number;
  mine: number;
  others_searching: number;
  others_waiting: number;
  held: boolean;
  cap: number;
  cpu_ms_per_day: string;
  used_ms: string;
  day_ends: Date;
}

const POOL = `
  with leased as (
    select s.person_id from parcel p join search s on s.id = p.search_id where p.state = 'leased')
  select
    (select coalesce(sum(workers), 0)::int from station
      where stopped_at is null and not stand_by and heard_at > now() - ${NOT_HEARD}) as workers,
    (select count(*)::int from leased) as busy,
    (select count(*)::int from leased where person_id = $1) as mine,
    (select count(*)::int from search where state = 'searching' and person_id <> $1) as others_searching,
    (select count(*)::int from search where state = 'waiting' and person_id <> $1) as others_waiting,
    exists (select 1 from setting where name = 'pool held' and value = 'true') as held,
    a.workers as cap, a.cpu_ms_per_day, coalesce(u.cpu_ms, 0) as used_ms,
    (((now() at time zone $2)::date + 1)::timestamp at time zone $2) as day_ends
  from allowance a
  left join usage_day u on u.person_id = a.person_id and u.day = (now() at time zone $2)::date
  where a.person_id = $1`;

/** More of one's own are seen in their studies. */
const MOST_LISTED = 100;

/** One's own in full, others' as counts. */
export async function viewPool({ database, poolTimeZone }: QuestionsContext, personId: string): Promise<Pool> {
  const [pool] = await database.query<PoolRow>(POOL, [personId, poolTimeZone]);
  const own = await database.query<SummaryRow>(
    `(select ${SUMMARY_COLUMNS} from ${SEEN_QUESTIONS} where s.person_id = $1 and s.state = 'searching'
      order by s.created_at limit ${MOST_LISTED})
     union all
     (select ${SUMMARY_COLUMNS} from ${SEEN_QUESTIONS} where s.person_id = $1 and s.state = 'waiting'
      order by s.had_quantum, s.served_at, s.created_at limit ${MOST_LISTED})`,
    [personId],
  );
  const { workers, busy, mine, held } = pool!;
  return {
    workers,
    busy,
    yours: {
      busy: mine,
      running: own.filter((row) => row.state === 'searching').map(summary),
      waiting: own.filter((row) => row.state === 'waiting').map(summary),
    },
    others: { busy: busy - mine, searching: pool!.others_searching, waiting: pool!.others_waiting },
    allowance: { workers: pool!.cap, cpuSecondsPerDay: Number(pool!.cpu_ms_per_day) / 1000 },
    cpuSecondsUsedToday: Number(pool!.used_ms) / 1000,
    dayEndsAt: pool!.day_ends.toISOString(),
    held,
  };
}
