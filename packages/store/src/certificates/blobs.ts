/**
 * Bytes by their hash, in pieces of at most 1 MiB: large values cannot be read in parts, and pieces that two
 * certificates share are kept once. Hashes are of the bytes before compression.
 */
import { createHash } from 'node:crypto';
import { promisify } from 'node:util';
import { gunzip, gzip } from 'node:zlib';
import type { Sql } from '../database.ts';

const PIECE_BYTES = 1024 * 1024;
/** Pieces that are sent or fetched in one statement: bounds the memory of both sides. */
const PIECES_AT_ONCE = 8;

const deflate = promisify(gzip);
export const inflate = promisify(gunzip);

export async function packed(raw: Uint8Array): Promise<Buffer> {
  return deflate(raw);
}

/** Cuts the joined bytes into pieces, whatever the pieces were in which they came. */
export function* pieces(raw: readonly Uint8Array[]): Generator<Uint8Array> {
  let piece = Buffer.alloc(0);
  for (const part of raw) {
    for (let at = 0; at < part.byteLength;) {
      const take = Math.min(PIECE_BYTES - piece.byteLength, part.byteLength - at);
      piece = Buffer.concat([piece, part.subarray(at, at + take)]);
      at += take;
      if (piece.byteLength === PIECE_BYTES) {
        yield piece;
        piece = Buffer.alloc(0);
      }
    }
  }
  if (piece.byteLength > 0) yield piece;
}

/** Keeps the bytes and answers the hashes of their pieces in order, and the hash and length of the whole. */
export async function keepBlobs(
  sql: Sql,
  raw: readonly Uint8Array[],
): Promise<{ readonly hashes: string[]; readonly sha256: string; readonly bytes: number }> {
  const whole = createHash('sha256');
  const hashes: string[] = [];
  let bytes = 0;
  let batch: { sha256: string; gz: Buffer; bytes: number }[] = [];
  const flush = async () => {
    if (batch.length === 0) return;
    await sql.change(
      `insert into blob (sha256, gz, raw_bytes)
       select * from unnest($1::text[], $2::bytea[], $3::int[]) on conflict do nothing`,
      [batch.map((b) => b.sha256), batch.map((b) => b.gz), batch.map((b) => b.bytes)],
    );
    batch = [];
  };
  for (const piece of pieces(raw)) {
    whole.update(piece);
    const sha256 = createHash('sha256').update(piece).digest('hex');
    hashes.push(sha256);
    bytes += piece.byteLength;
    batch.push({ sha256, gz: await packed(piece), bytes: piece.byteLength });
    if (batch.length === PIECES_AT_ONCE) await flush();
  }
  await flush();
  return { hashes, sha256: whole.digest('hex'), bytes };
}

/** The bytes of blobs that a table lists by number, in order. `list` names columns no and blob_sha256 for $1. */
export async function* readBlobs(sql: Sql, list: string, key: string): AsyncGenerator<Uint8Array> {
  for (let after = -1; ;) {
    const rows = await sql.query<{ no: number; gz: Buffer }>(
      `select l.no, b.gz from (${list}) l join blob b on b.sha256 = l.blob_sha256
       where l.no > $2 order by l.no limit ${PIECES_AT_ONCE}`,
      [key, after],
    );
    for (const row of rows) yield inflate(row.gz);
    if (rows.length < PIECES_AT_ONCE) return;
    after = rows.at(-1)!.no;
  }
}
