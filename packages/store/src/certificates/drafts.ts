/**
 * Certificates that are still being checked in parcels. Their pieces are kept as they are written, one at a time; only the
 * list of all of them makes a draft, and only a verdict makes a draft a certificate.
 */
import type { Sql } from '../database.ts';
import { inflate } from './blobs.ts';

/** The search has no draft that could be settled. */
export class NoDraft extends Error {
  override readonly name = 'NoDraft';
}

export async function keepDraft(
  database: Sql & { transaction<T>(work: (tx: Sql) => Promise<T>): Promise<T> },
  searchId: string,
  pieces: readonly string[],
): Promise<void> {
  await database.transaction(async (tx) => {
    await tx.query('select 1 from search where id = $1 for no key update', [searchId]);
    await tx.change('delete from draft_chunk where search_id = $1', [searchId]);
    await tx.change(
      `insert into draft_chunk (search_id, no, blob_sha256)
       select $1, t.no - 1, t.sha256 from unnest($2::text[]) with ordinality t(sha256, no)`,
      [searchId, pieces],
    );
  });
}

export async function draftPiece(sql: Sql, searchId: string, no: number): Promise<Uint8Array | null> {
  const [row] = await sql.query<{ gz: Buffer }>(
    `select b.gz from draft_chunk d join blob b on b.sha256 = d.blob_sha256 where d.search_id = $1 and d.no = $2`,
    [searchId, no],
  );
  return row === undefined ? null : inflate(row.gz);
}

/** The draft becomes the certificate of this hash, unless another search has written the same one before. */
export async function draftToCertificate(tx: Sql, searchId: string, sha256: string): Promise<void> {
  const [draft] = await tx.query<{ chunks: number; bytes: string }>(
    `select count(*)::int as chunks, coalesce(sum(b.raw_bytes), 0) as bytes
     from draft_chunk d join blob b on b.sha256 = d.blob_sha256 where d.search_id = $1`,
    [searchId],
  );
  if (draft!.chunks === 0) throw new NoDraft(`search ${searchId} has no draft`);
  const made = await tx.change(
    'insert into certificate (sha256, raw_bytes, chunks) values ($1, $2, $3) on conflict do nothing',
    [sha256, draft!.bytes, draft!.chunks],
  );
  if (made === 0) return;
  await tx.change(
    `insert into certificate_chunk (certificate_sha256, no, blob_sha256)
     select $1, no, blob_sha256 from draft_chunk where search_id = $2`,
    [sha256, searchId],
  );
}
