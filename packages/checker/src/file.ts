/** The file as bytes: one object, or head and chunks; the colophon over the raw bytes. FORMAT.md, sections 2 and 9. */
import {
  countOf,
  decodeText,
  listOf,
  NotChecked,
  objectOf,
  readJson,
  Rejection,
  type Json,
  type JsonObject,
} from './reading.ts';
import { PieceReader } from './piece-reader.ts';
import { sha256Hex } from './sha256.ts';

export interface CertificateFile {
  readonly head: JsonObject;
  /** Each embedding with its place, in order; read when it is asked for, once. */
  readonly embeddings: () => Iterable<{ readonly place: string; readonly value: Json }>;
}

const FORMAT = 'palmette.certificate/1';
const MEMBERS = ['format', 'question', 'lattice', 'claim', 'embeddings', 'tests', 'evidence', 'end'];
/** FORMAT.md, section 9. */
const CHUNK_BYTES = 1024 * 1024;

/**
 * Reads the head; of the chunks of a large list one is held at a time, while the embeddings are walked through (once).
 * @param source all bytes, or pieces of them in order, cut anywhere
 */
export function openFile(source: Uint8Array | Iterable<Uint8Array>): CertificateFile {
  const reader = new PieceReader(source);
  const headBytes = reader.line();
  if (headBytes.length === 0) throw new Rejection('/', 'the file is empty');
  const text = decodeText(headBytes, '/');
  const value = readJson(text, '/');
  const format = (value as { format?: Json } | null)?.format;
  if (typeof format === 'string' && format !== FORMAT)
    throw new NotChecked(`the format ${JSON.stringify(format)} is not known here`);
  const head = objectOf(value, '', MEMBERS);
  if (Object.keys(head).join() !== MEMBERS.join())
    throw new Rejection('/', `members not in the order ${MEMBERS.join(', ')}`);
  const records = checkColophon(headBytes, head['end']);
  const list = head['embeddings'];
  if (Array.isArray(list)) {
    if (reader.take(1).length > 0) throw new Rejection('/', 'bytes after the end');
    if (list.length !== records) throw new Rejection('/end/records', `expected ${list.length}`);
    return {
      head,
      embeddings: () => (list as readonly Json[]).map((entry, i) => ({ place: `/embeddings/${i}`, value: entry })),
    };
  }
  const chunks = readEntries(list);
  const total = chunks.reduce((sum, chunk) => sum + chunk.records, 0);
  if (total !== records) throw new Rejection('/end/records', `expected ${total}`);
  return { head, embeddings: () => chunkEmbeddings(chunks, reader, JSON.stringify(head['end'])) };
}

/** The number of records that the colophon claims, once its hash is right. */
function checkColophon(head: Uint8Array, end: Json | undefined): number {
  const colophon = objectOf(end, '/end', ['records', 'sha256']);
  const marker = new TextEncoder().encode(',"end":');
  let at = head.length - marker.length;
  while (at >= 0 && !marker.every((byte, i) => head[at + i] === byte)) at -= 1;
  if (at < 0) throw new Rejection('/end', 'missing');
  const hash = sha256Hex(head.subarray(0, at));
  if (colophon['sha256'] !== hash) throw new Rejection('/end/sha256', `the bytes have ${hash}`);
  return countOf(colophon['records'], '/end/records');
}

interface ChunkEntry {
  readonly place: string;
  readonly size: number;
  readonly sha256: Json | undefined;
  readonly records: number;
}

function readEntries(value: Json | undefined): ChunkEntry[] {
  const o = objectOf(value, '/embeddings', ['chunks']);
  return listOf(o['chunks'], '/embeddings/chunks').map((entry, no): ChunkEntry => {
    const place = `/embeddings/chunks/${no}`;
    const chunk = objectOf(entry, place, ['sha256', 'records', 'bytes']);
    const size = countOf(chunk['bytes'], `${place}/bytes`, 1);
    const records = countOf(chunk['records'], `${place}/records`, 1);
    if (size > CHUNK_BYTES && records > 1)
      throw new Rejection(`${place}/bytes`, `a chunk of several embeddings has at most ${CHUNK_BYTES}`);
    return { place, size, sha256: chunk['sha256'], records };
  });
}

function* chunkEmbeddings(
  chunks: readonly ChunkEntry[],
  reader: PieceReader,
  end: string,
): Generator<{ place: string; value: Json }> {
  for (const { place, size, sha256, records } of chunks) {
    const bytes = reader.take(size);
    if (bytes.length !== size) throw new Rejection(place, 'the file ends inside this chunk');
    if (sha256Hex(bytes) !== sha256) throw new Rejection(`${place}/sha256`, 'the bytes have another hash');
    const lines = decodeText(bytes, place).split('\n');
    if (lines.pop() !== '' || lines.length !== records)
      throw new Rejection(`${place}/records`, `expected ${lines.length}`);
    for (const [i, line] of lines.entries()) yield { place: `${place}/${i}`, value: readJson(line, `${place}/${i}`) };
  }
  const wanted = `{"end":${end}}`;
  const last = decodeText(reader.take(wanted.length + 2), '/end').replace(/\n$/, '');
  if (last !== wanted) throw new Rejection('/end', 'the last line does not repeat the colophon');
}
