import type { Sql } from '../database.ts';
import type { QuestionsStore } from '../door.ts';
import { isId } from '../people/person-row.ts';
import { keepBlobs, readBlobs } from './blobs.ts';

export type KeptCertificate = Awaited<ReturnType<typeof keepBlobs>>;

/** The bytes that were written are not the bytes that were checked. */
export class CertificateHashFault extends Error {
  override readonly name = 'CertificateHashFault';
}

/** Keeps the certificate's bytes, outside the transaction that settles: nothing points to them yet. */
export async function keepCertificate(
  sql: Sql,
  certificate: { readonly sha256: string; readonly raw: readonly Uint8Array[] },
): Promise<KeptCertificate> {
  const kept = await keepBlobs(sql, certificate.raw);
  if (kept.sha256 !== certificate.sha256)
    throw new CertificateHashFault(`the certificate's hash is ${kept.sha256}, not ${certificate.sha256} as was said`);
  return kept;
}

/** Two searches of the same question have the same bytes: the certificate is written once. */
export async function insertCertificate(tx: Sql, { hashes, sha256, bytes }: KeptCertificate): Promise<void> {
  const made = await tx.change(
    'insert into certificate (sha256, raw_bytes, chunks) values ($1, $2, $3) on conflict do nothing',
    [sha256, bytes, hashes.length],
  );
  if (made === 0) return;
  await tx.change(
    `insert into certificate_chunk (certificate_sha256, no, blob_sha256)
     select $1, t.no - 1, t.sha256 from unnest($2::text[]) with ordinality t(sha256, no)`,
    [sha256, hashes],
  );
}

type Certificate = NonNullable<Awaited<ReturnType<QuestionsStore['certificate']>>>;

export async function certificateOf(sql: Sql, questionId: string): Promise<Certificate | null> {
  if (!isId(questionId)) return null;
  const [found] = await sql.query<{ sha256: string; raw_bytes: string }>(
    `select c.sha256, c.raw_bytes from search s
     join search_certificate sc on sc.search_id = s.id
     join certificate c on c.sha256 = sc.certificate_sha256 where s.question_id = $1`,
    [questionId],
  );
  if (found === undefined) return null;
  return {
    sha256: found.sha256,
    bytes: Number(found.raw_bytes),
    chunks: readBlobs(sql, 'select no, blob_sha256 from certificate_chunk where certificate_sha256 = $1', found.sha256),
  };
}
