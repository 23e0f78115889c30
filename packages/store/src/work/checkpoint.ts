/**
 * What a worker reports, in one fenced transaction: place, counters, CPU of parcel, search and day, new chunks. The
 * search's row is locked first, the parcel's attempt is the fence: a worker that was frozen and wakes up writes nothing.
 */
import type { Transaction } from '../database.ts';
import type { Advice, CheckpointWrite, Lease } from '../door.ts';
import { packed } from '../certificates/blobs.ts';
import { checksum, fencedOff, lockSearch, type LockedSearch } from './lease.ts';
import { changedFigures } from './progress.ts';
import { storedPart } from './share.ts';
import type { WorkContext } from './work-context.ts';

/** CPU time for which a new search may jump the turn. */
const FRESH_CPU_MS = 2_000;

export interface Written {
  readonly search: LockedSearch;
  readonly advice: Advice;
  /** The parcel ran alone after a crash and has got on: it need not run alone any more. */
  readonly recovered: boolean;
}

export async function checkpoint(context: WorkContext, lease: Lease, write: CheckpointWrite): Promise<Advice> {
  const chunks = await packChunks(write);
  return context.database.transaction(async (tx) => {
    const search = await lockSearch(tx, lease.searchId);
    const { advice } = await writeCheckpoint(context, tx, search, lease, write, chunks);
    await changedFigures(tx, lease.searchId, write.nodesPerSecond);
    return advice;
  });
}

export interface PackedChunk {
  readonly records: number;
  readonly gz: Buffer;
}

/** Compressed before the transaction begins: no lock is held meanwhile. */
export async function packChunks({ chunks }: CheckpointWrite): Promise<PackedChunk[]> {
  return Promise.all(chunks.map(async ({ records, raw }) => ({ records, gz: await packed(raw) })));
}

/** The search is locked by the caller. @throws FencedOff */
export async function writeCheckpoint(
  context: WorkContext,
  tx: Transaction,
  search: LockedSearch,
  lease: Lease,
  write: CheckpointWrite,
  chunks: readonly PackedChunk[],
): Promise<Written> {
  const place = write.checkpoint === '' ? null : write.checkpoint;
  const cpuMs = Math.max(0, Math.round(write.cpuMs));
  const [parcel] = await tx.query<{ yield_wanted: boolean; recovered: boolean }>(
    `update parcel p set checkpoint = coalesce($3, p.checkpoint), checkpoint_sha256 = coalesce($4, p.checkpoint_sha256),
       nodes = p.nodes + $5, orbits = p.orbits + $6, cpu_ms = p.cpu_ms + $7, share_done = $8,
       chunks = $9, heartbeat_at = clock_timestamp(),
       crashes = case when before.got_on then 0 else p.crashes end,
       alone_crashes = case when before.got_on then 0 else p.alone_crashes end,
       alone = p.alone and not before.got_on
     from (select id, alone, $3::text is not null and checkpoint is distinct from $3 and $5::numeric > 0 as got_on
           from parcel where id = $1) before
     where p.id = before.id and p.attempt = $2 and p.state = 'leased'
     returning p.yield_wanted, before.alone and before.got_on as recovered`,
    [
      lease.parcelId,
      lease.attempt,
      place,
      place === null ? null : checksum(place),
      write.nodes.toString(),
      write.orbits.toString(),
      cpuMs,
      storedPart(write.shareDone),
      lease.chunks + chunks.length,
    ],
  );
  if (parcel === undefined) throw fencedOff(lease);
  await writeChunks(tx, lease, chunks);
  const spentNow = await countCpu(context, tx, search, cpuMs);
  if (spentNow) {
    await tx.change(`update parcel set yield_wanted = true where search_id = $1 and state = 'leased'`, [search.id]);
    await context.nudges.notify(tx);
  }
  const wanted = parcel.yield_wanted || parcel.recovered || (await yieldFor(context, tx, lease));
  return { search, advice: wanted || spentNow ? 'yield' : 'go on', recovered: parcel.recovered };
}

/** Chunks past the last checkpoint of a dead worker are overwritten by number. */
async function writeChunks(tx: Transaction, lease: Lease, chunks: readonly PackedChunk[]): Promise<void> {
  if (chunks.length === 0) return;
  await tx.change(
    `insert into parcel_chunk (parcel_id, no, records, gz)
     select $1, $2 + t.i - 1, t.records, t.gz from unnest($3::int[], $4::bytea[]) with ordinality t(records, gz, i)
     on conflict (parcel_id, no) do update set records = excluded.records, gz = excluded.gz`,
    [lease.parcelId, lease.chunks, chunks.map((c) => c.records), chunks.map((c) => c.gz)],
  );
}

/** CPU of the search and of its owner's day. True if the budget is used up now. */
async function countCpu(context: WorkContext, tx: Transaction, search: LockedSearch, cpuMs: number): Promise<boolean> {
  const [counted] = await tx.query<{ spent: boolean }>(
    `update search set cpu_ms = cpu_ms + $2, had_quantum = had_quantum or cpu_ms + $2 >= ${FRESH_CPU_MS}
     where id = $1 returning coalesce(cpu_ms >= budget_cpu_ms, false) as spent`,
    [search.id, cpuMs],
  );
  if (cpuMs === 0) return counted!.spent;
  await tx.change(
    `insert into usage_day (person_id, day, cpu_ms)
     values ($1, (clock_timestamp() at time zone $3)::date, $2)
     on conflict (person_id, day) do update set cpu_ms = usage_day.cpu_ms + excluded.cpu_ms`,
    [search.person_id, cpuMs, context.poolTimeZone],
  );
  // what a new search took by jumping the turn, the others get back before its owner may jump again
  if (!search.had_quantum)
    await tx.change(
      `update person set jump_after = greatest(jump_after, clock_timestamp()) + $2 * interval '1 millisecond' where id = $1`,
      [search.person_id, cpuMs],
    );
  return counted!.spent;
}

/** Whether anything beside the parcel's own row asks the worker to yield. The same is said in heartbeats. */
async function yieldFor({ poolTimeZone }: WorkContext, tx: Transaction, lease: Lease): Promise<boolean> {
  const [row] = await tx.query<{ wanted: boolean }>(
    `select ${YIELD_REASONS} as wanted from parcel p ${YIELD_TABLES} where p.id = $1`.replaceAll('$zone', '$2'),
    [lease.parcelId, poolTimeZone],
  );
  return row!.wanted;
}

/** Held search or pool, station standing by, budget or day's CPU used up, owner not active. `$zone` is the pool's zone. */
export const YIELD_REASONS = `(
  s.state in ('held', 'spent') or not o.active or coalesce(u.cpu_ms, 0) >= a.cpu_ms_per_day or coalesce(t.stand_by, false)
  or coalesce(s.cpu_ms >= s.budget_cpu_ms, false)
  or exists (select 1 from setting where name = 'pool held' and value = 'true'))`;
export const YIELD_TABLES = `
  join search s on s.id = p.search_id
  join person o on o.id = s.person_id
  join allowance a on a.person_id = s.person_id
  left join station t on t.id = p.station_id
  left join usage_day u on u.person_id = s.person_id and u.day = (clock_timestamp() at time zone $zone)::date`;
