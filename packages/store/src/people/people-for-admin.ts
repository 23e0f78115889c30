import type { PersonAdmin, Role } from '@palmette/contracts';
import type { PeopleContext } from './people.ts';

interface Row {
  id: string;
  email: string;
  name: string;
  role: Role;
  active: boolean;
  invited: boolean;
  workers: number;
  cpu_ms_per_day: string;
  busy: number;
  cpu_ms_today: string;
  seen_at: Date | null;
}

/** Everybody with their allowance and what of it they use now. */
export async function listForAdmin({ database, poolTimeZone }: PeopleContext): Promise<PersonAdmin[]> {
  const rows = await database.query<Row>(
    `select p.id, p.email, p.name, p.role, p.active, p.password_hash is null as invited,
            a.workers, a.cpu_ms_per_day, coalesce(u.cpu_ms, 0) as cpu_ms_today, p.seen_at,
            (select count(*)::int from parcel q join search s on s.id = q.search_id
             where q.state = 'leased' and s.person_id = p.id) as busy
     from person p
     join allowance a on a.person_id = p.id
     left join usage_day u on u.person_id = p.id and u.day = (now() at time zone $1)::date
     order by lower(p.name), p.id`,
    [poolTimeZone],
  );
  return rows.map(({ id, email, name, role, active, invited, ...row }) => ({
    id,
    email,
    name,
    role,
    active,
    invited,
    allowance: { workers: row.workers, cpuSecondsPerDay: Number(row.cpu_ms_per_day) / 1000 },
    workersBusy: row.busy,
    cpuSecondsToday: Number(row.cpu_ms_today) / 1000,
    lastSeenAt: row.seen_at?.toISOString() ?? null,
  }));
}
