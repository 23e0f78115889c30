/** What the parcels of a stage counted and found, in address order. */
import { inflate } from '../certificates/blobs.ts';
import type { Sql } from '../database.ts';
import type { WorkStore } from '../door.ts';

/** Chunks are at most 1 MiB raw: this many are fetched at once. */
const CHUNKS_AT_ONCE = 16;

interface ChunkRow {
  parcel_id: string;
  position: string;
  no: number;
  records: number;
  gz: Buffer;
}

export async function* found(
  sql: Sql,
  searchId: string,
  stage: number,
): AsyncGenerator<{ records: number; raw: Uint8Array }> {
  for (let after: readonly [string, string, number] = ['{}', '-1', -1]; ;) {
    const rows = await sql.query<ChunkRow>(
      `select p.id as parcel_id, p.from_address::text as position, c.no, c.records, c.gz
       from parcel p join parcel_chunk c on c.parcel_id = p.id and c.no < p.chunks
       where p.search_id = $1 and p.phase = 'listing' and p.stage = $2
         and (p.from_address, p.id, c.no) > ($3::bigint[], $4::bigint, $5::int)
       order by p.from_address, p.id, c.no limit ${CHUNKS_AT_ONCE}`,
      [searchId, stage, ...after],
    );
    for (const { records, gz } of rows) yield { records, raw: await inflate(gz) };
    const last = rows.at(-1);
    if (last === undefined || rows.length < CHUNKS_AT_ONCE) return;
    after = [last.position, last.parcel_id, last.no];
  }
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
