/** What the parcels of a stage counted and found, in address order. */
import { inflate } from '../certificates/blobs.ts';
import type { Sql } from '../database.ts';
import type { FoundChunk, FoundPlace, WorkStore } from '../door.ts';

/** The next chunk, at most about 1 MiB: the list of a search can be longer than any memory. */
export async function found(
  sql: Sql,
  searchId: string,
  stage: number,
  after: FoundPlace | null,
): Promise<FoundChunk | null> {
  const { from, parcelId, no } = after ?? { from: '{}', parcelId: '-1', no: -1 };
  const [row] = await sql.query<{ parcel_id: string; position: string; no: number; records: number; gz: Buffer }>(
    `select p.id as parcel_id, p.from_address::text as position, c.no, c.records, c.gz
     from parcel p cross join lateral (
       select no, records, gz from parcel_chunk
       where parcel_id = p.id and no < p.chunks and (p.id <> $4::bigint or no > $5::int)
       order by no limit 1) c
     where p.search_id = $1 and p.phase = 'listing' and p.stage = $2
       and (p.from_address, p.id) >= ($3::bigint[], $4::bigint)
     order by p.from_address, p.id limit 1`,
    [searchId, stage, from, parcelId, no],
  );
  if (row === undefined) return null;
  const place = { from: row.position, parcelId: row.parcel_id, no: row.no };
  return { place, records: row.records, raw: await inflate(row.gz) };
}

interface ParcelRow {
  from_address: number[];
  to_address: number[] | null;
  nodes: string;
  orbits: string;
  cpu_ms: string;
  result: string | null;
}

export const parcels =
  (sql: Sql): WorkStore['parcels'] =>
  async (searchId, phase, stage) => {
    const rows = await sql.query<ParcelRow>(
      `select to_json(from_address) as from_address, to_json(to_address) as to_address, nodes, orbits, cpu_ms, result
       from parcel where search_id = $1 and phase = $2 and stage = $3 order by parcel.from_address, id`,
      [searchId, phase, stage],
    );
    return rows.map((row) => ({
      from: row.from_address,
      to: row.to_address,
      nodes: BigInt(row.nodes),
      orbits: BigInt(row.orbits),
      cpuMs: Number(row.cpu_ms),
      result: row.result,
    }));
  };
