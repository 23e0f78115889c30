/** Stations: coming, being alive, going. A heartbeat takes advice back, so hold, withdraw and yield reach threads soon. */
import type { Advice, WorkStore } from '../door.ts';
import { SCHEMA_NUMBER } from '../migrations/index.ts';
import { YIELD_REASONS, YIELD_TABLES } from './checkpoint.ts';
import { lockSearch, settleDown } from './lease.ts';
import { changedState } from './progress.ts';
import type { WorkContext } from './work-context.ts';

type Report = Parameters<WorkStore['heartbeat']>[1];
type Station = Parameters<WorkStore['registerStation']>[0];

export async function registerStation({ database }: WorkContext, station: Station): Promise<void> {
  const { id, name, version, workers } = station;
  await database.change(
    `insert into station (id, name, version, workers) values ($1, $2, $3, $4)
     on conflict (id) do update set name = excluded.name, version = excluded.version, workers = excluded.workers,
       heard_at = now(), stopped_at = null`,
    [id, name, version, workers],
  );
}

/**
 * One statement on the connection kept for it. Rows that somebody is writing at this moment are passed over, so a
 * heartbeat waits for nobody; whoever writes a parcel refreshes it anyway. A newer schema makes the station stand by.
 */
const HEARTBEAT = `
  with me as (
    update station set heard_at = clock_timestamp(), busy = $2, memory_bytes = $3
    where id = (select id from station where id = $1 for no key update skip locked)),
  told as (select * from unnest($4::bigint[], $5::int[]) as t(parcel_id, attempt)),
  held as (
    select p.id from parcel p join told on told.parcel_id = p.id and told.attempt = p.attempt
    where p.state = 'leased' for no key update of p skip locked),
  beaten as (update parcel set heartbeat_at = clock_timestamp() where id in (select id from held)),
  advice as (
    select told.parcel_id,
      case when l.id is null then 'stop' when l.wanted then 'yield' else 'go on' end as advice
    from told left join (
      select p.id, p.attempt, p.yield_wanted or ${YIELD_REASONS} as wanted
      from parcel p ${YIELD_TABLES}
      where p.state = 'leased' and p.id in (select parcel_id from told)) l
    on l.id = told.parcel_id and l.attempt = told.attempt)
  select coalesce((select stand_by from station where id = $1), true) or (select count(*) from migration) > $7 as stand_by,
    coalesce((select json_object_agg(parcel_id, advice) from advice), '{}') as advice`.replaceAll('$zone', '$6');

export async function heartbeat(
  { database, poolTimeZone }: WorkContext,
  stationId: string,
  { busy, memoryBytes, leases }: Report,
): Promise<{ standBy: boolean; advice: ReadonlyMap<string, Advice> }> {
  const [row] = await database.beat<{ stand_by: boolean; advice: Record<string, Advice> }>(HEARTBEAT, [
    stationId,
    busy,
    memoryBytes,
    leases.map((l) => l.parcelId),
    leases.map((l) => l.attempt),
    poolTimeZone,
    SCHEMA_NUMBER,
  ]);
  return { standBy: row!.stand_by, advice: new Map(Object.entries(row!.advice)) };
}

/** Goodbye: what the station still holds goes back without blame. */
export async function stationStopped({ database, nudges }: WorkContext, stationId: string): Promise<void> {
  const held = await database.query<{ search_id: string }>(
    `select distinct search_id from parcel where station_id = $1 and state = 'leased' order by search_id`,
    [stationId],
  );
  for (const { search_id } of held)
    await database.transaction(async (tx) => {
      await lockSearch(tx, search_id);
      await tx.change(
        `update parcel set state = 'waiting', station_id = null, yield_wanted = false, yield_for = null
         where search_id = $1 and station_id = $2 and state = 'leased'`,
        [search_id, stationId],
      );
      await settleDown(tx, search_id);
      await changedState(tx, search_id);
    });
  await database.transaction(async (tx) => {
    const known = await tx.change(
      'update station set stopped_at = now(), busy = 0, alone_for = null where id = $1 and stopped_at is null',
      [stationId],
    );
    if (known > 0) await nudges.notify(tx);
  });
}
