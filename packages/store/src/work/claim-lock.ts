/**
 * Leases are given out one at a time: whoever counts what a person runs holds this lock until the new lease is
 * committed, so a cap holds at every instant across any number of stations. Order of locks everywhere: this one, then
 * the search's row, then its parcels, then counters (usage_day, progress, person).
 */
import type { Sql } from '../database.ts';

export async function lockClaims(tx: Sql, schema: string): Promise<void> {
  await tx.query('select pg_advisory_xact_lock(hashtext($1))', [`${schema} claim`]);
}

/** Before rows of several parcels are written: their searches, always in the same order. */
export async function lockSearchesOfLeases(tx: Sql, where: 'person' | 'station', id: string): Promise<void> {
  const mine = where === 'person' ? 's.person_id = $1' : 'p.station_id = $1';
  await tx.query(
    `select s.id from search s
     where s.id in (select p.search_id from parcel p join search s on s.id = p.search_id where p.state = 'leased' and ${mine})
     order by s.id for no key update`,
    [id],
  );
}

/** The cap was lowered below what runs: the newest leases above it are asked to yield. */
export async function yieldAboveCap(tx: Sql, personId: string, workers: number): Promise<void> {
  await lockSearchesOfLeases(tx, 'person', personId);
  await tx.change(
    `update parcel set yield_wanted = true where id in (
       select p.id from parcel p join search s on s.id = p.search_id
       where p.state = 'leased' and s.person_id = $1 order by p.leased_at, p.id offset $2)`,
    [personId, workers],
  );
}
