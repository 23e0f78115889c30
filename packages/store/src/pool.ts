/** The pool as people and admins see it. */
import type { AuditRow, LetterRow, StationState } from '@palmette/contracts';
import { audit } from './audit.ts';
import { pageOf, readCursor } from './cursor.ts';
import type { PoolStore } from './door.ts';
import { isId } from './people/person-row.ts';
import { viewPool } from './pool-view.ts';
import { NOT_HEARD } from './questions/place.ts';
import type { QuestionsContext } from './questions/questions.ts';
import type { NudgeQueue } from './queue/nudge-queue.ts';

export interface PoolContext extends QuestionsContext {
  readonly queue: NudgeQueue;
}

/** A station that said goodbye, or fell silent this long ago, is not listed any more. */
const LISTED = "stopped_at is null and heard_at > now() - interval '1 hour'";

interface StationRow {
  id: string;
  name: string;
  state: StationState;
  workers: number;
  busy: number;
  started_at: Date;
  heard_at: Date;
  memory_bytes: string;
  version: string;
}

export function openPool(context: PoolContext): PoolStore {
  const { database, nudges, queue } = context;
  return {
    view: (personId) => viewPool(context, personId),

    async stations() {
      const rows = await database.query<StationRow>(
        `select id, name, workers, busy, started_at, heard_at, memory_bytes, version,
           case when heard_at <= now() - ${NOT_HEARD} then 'not heard' when stand_by and busy > 0 then 'finishing'
                when stand_by then 'standing by' else 'working' end as state
         from station where ${LISTED} order by lower(name), started_at, id`,
      );
      return rows.map(({ started_at, heard_at, memory_bytes, ...row }) => ({
        ...row,
        startedAt: started_at.toISOString(),
        heardAt: heard_at.toISOString(),
        memoryBytes: Number(memory_bytes),
      }));
    },

    standBy: (by, stationId, standBy) =>
      database.transaction(async (tx) => {
        if (!isId(stationId)) return false;
        const [station] = await tx.query<{ name: string }>(
          'update station set stand_by = $2 where id = $1 and stopped_at is null returning name',
          [stationId, standBy],
        );
        if (station === undefined) return false;
        await audit(tx, by, standBy ? 'stand by' : 'take work', station.name);
        await nudges.notify(tx);
        return true;
      }),

    async holdPool(by, held) {
      await database.transaction(async (tx) => {
        await tx.change(
          `insert into setting (name, value) values ('pool held', $1) on conflict (name) do update set value = excluded.value`,
          [String(held)],
        );
        await audit(tx, by, held ? 'hold pool' : 'resume pool', 'pool');
        if (held) await nudges.notify(tx);
        else await nudges.work(tx);
      });
    },

    async usage(days) {
      const rows = await database.query<{ person: string; day: string; cpu_ms: string }>(
        `select p.name as person, u.day::text as day, u.cpu_ms from usage_day u join person p on p.id = u.person_id
         where u.day > (now() at time zone $2)::date - $1::int order by u.day desc, u.cpu_ms desc, p.name, p.id`,
        [days, context.poolTimeZone],
      );
      return rows.map(({ person, day, cpu_ms }) => ({ person, day, cpuSeconds: Number(cpu_ms) / 1000 }));
    },

    async audit({ after, limit }) {
      const cursor = readCursor(after, 1);
      type Row = Omit<AuditRow, 'at'> & { at: Date };
      const rows = await database.query<Row>(
        `select a.id, a.at, p.name as by, a.action, a.subject, a.detail from audit a left join person p on p.id = a.person_id
         ${cursor === null ? '' : 'where a.id < $2::bigint'} order by a.id desc limit $1`,
        [limit + 1, ...(cursor ?? [])],
      );
      return pageOf(
        rows,
        limit,
        (row) => [row.id],
        ({ at, ...row }) => ({ ...row, at: at.toISOString() }),
      );
    },

    async letters({ after, limit }) {
      const cursor = readCursor(after, 2);
      interface Row {
        id: string;
        to: string;
        subject: string;
        state: LetterRow['state'];
        attempts: number;
        created_at: Date;
        created_key: string;
        sent_at: Date | null;
        fault: string | null;
      }
      const rows = await database.query<Row>(
        `select id, recipient as to, subject, case when state = 'sending' then 'waiting' else state end as state,
           attempt as attempts, created_at, created_at::text as created_key, sent_at, fault
         from letter ${cursor === null ? '' : 'where (created_at, id) < ($2::timestamptz, $3::uuid)'}
         order by created_at desc, id desc limit $1`,
        [limit + 1, ...(cursor ?? [])],
      );
      return pageOf(
        rows,
        limit,
        (row) => [row.created_key, row.id],
        ({ id, to, subject, state, attempts, fault, created_at, sent_at }) => ({
          id,
          to,
          subject,
          state,
          attempts,
          createdAt: created_at.toISOString(),
          sentAt: sent_at?.toISOString() ?? null,
          fault,
        }),
      );
    },

    /** Never throws: what does not answer is said. */
    async health() {
      try {
        const [row] = await database.query<{ heard_at: Date | null; stations: number }>(
          `select max(heard_at) as heard_at,
             (count(*) filter (where stopped_at is null and heard_at > now() - ${NOT_HEARD}))::int as stations from station`,
        );
        const queueAnswers = await queue.waiting().then(
          () => true,
          () => false,
        );
        return {
          database: true,
          queue: queueAnswers,
          stationHeardAt: row!.heard_at?.toISOString() ?? null,
          stations: row!.stations,
        };
      } catch {
        return { database: false, queue: false, stationHeardAt: null, stations: 0 };
      }
    },
  };
}
