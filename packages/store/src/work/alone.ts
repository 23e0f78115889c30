/**
 * A parcel whose process died runs alone in its station, so that the next crash can only be its own. When its turn
 * comes at a station that has other work, the station empties itself: its parcels yield and nothing else is begun.
 */
import type { Transaction } from '../database.ts';
import { lockSearchesOfLeases } from './claim-lock.ts';
import { NOT_HEARD } from '../questions/place.ts';

/** A station was emptied for this parcel. */
export interface Reserved {
  readonly searchId: string;
  readonly parcelId: string;
}

/** `emptying` while the station still runs something else; what it is kept for once it is empty; else null. */
export async function prepareAlone(
  tx: Transaction,
  stationId: string,
  empty: boolean,
): Promise<'emptying' | Reserved | null> {
  const [kept] = await tx.query<{ search_id: string | null; parcel_id: string }>(
    `select s.id as search_id, t.alone_for as parcel_id from station t
     left join parcel p on p.id = t.alone_for and p.state = 'waiting' and p.alone
     left join search s on s.id = p.search_id and s.state in ('waiting', 'searching')
     where t.id = $1 and t.alone_for is not null`,
    [stationId],
  );
  if (kept === undefined) return null;
  if (kept.search_id !== null && !empty) return 'emptying';
  await tx.change('update station set alone_for = null where id = $1', [stationId]);
  return kept.search_id === null ? null : { searchId: kept.search_id, parcelId: kept.parcel_id };
}

/** False if another living station empties itself for the search's parcels already. */
export async function reserveForAlone(tx: Transaction, stationId: string, searchId: string): Promise<boolean> {
  const [parcel] = await tx.query<{ id: string }>(
    `select p.id from parcel p where p.search_id = $1 and p.state = 'waiting' and p.alone
       and not exists (select 1 from station t where t.alone_for = p.id and t.id <> $2 and t.stopped_at is null
                       and t.heard_at > now() - ${NOT_HEARD})
     order by p.from_address, p.id limit 1`,
    [searchId, stationId],
  );
  if (parcel === undefined) return false;
  await tx.change('update station set alone_for = $2 where id = $1', [stationId, parcel.id]);
  await lockSearchesOfLeases(tx, 'station', stationId);
  await tx.change(`update parcel set yield_wanted = true where station_id = $1 and state = 'leased'`, [stationId]);
  return true;
}
