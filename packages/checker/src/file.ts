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
import { sha256Hex } from './sha256.ts';

export interface CertificateFile {
  readonly head: JsonObject;
  /** Each embedding with its place, in order; read when it is asked for. */
  readonly embeddings: () => Iterable<{ readonly place: string; readonly value: Json }>;
}

const FORMAT = 'palmette.certificate/1';
const MEMBERS = ['format', 'question', 'lattice', 'claim', 'embeddings', 'tests', 'evidence', 'end'];
const LINE_FEED = 10;

export function openFile(bytes: Uint8Array): CertificateFile {
  if (bytes.length === 0) throw new Rejection('/', 'the file is empty');
  const firstEnd = bytes.indexOf(LINE_FEED);
  const headBytes = firstEnd < 0 ? bytes : bytes.subarray(0, firstEnd);
  const rest = firstEnd < 0 ? new Uint8Array(0) : bytes.subarray(firstEnd + 1);
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
    if (rest.length > 0) throw new Rejection('/', 'bytes after the end');
    if (list.length !== records) throw new Rejection('/end/records', `expected ${list.length}`);
    return {
      head,
      embeddings: () => (list as readonly Json[]).map((entry, i) => ({ place: `/embeddings/${i}`, value: entry })),
    };
  }
  const chunks = readChunks(list, rest, JSON.stringify(head['end']));
  const total = chunks.reduce((sum, chunk) => sum + chunk.records, 0);
  if (total !== records) throw new Rejection('/end/records', `expected ${total}`);
  return { head, embeddings: () => chunkEmbeddings(chunks) };
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

interface Chunk {
  readonly bytes: Uint8Array;
  readonly records: number;
  readonly no: number;
}

function readChunks(value: Json | undefined, rest: Uint8Array, end: string): Chunk[] {
  const o = objectOf(value, '/embeddings', ['chunks']);
  let at = 0;
  const chunks = listOf(o['chunks'], '/embeddings/chunks').map((entry, no): Chunk => {
    const place = `/embeddings/chunks/${no}`;
    const chunk = objectOf(entry, place, ['sha256', 'records', 'bytes']);
    const size = countOf(chunk['bytes'], `${place}/bytes`, 1);
    const bytes = rest.subarray(at, at + size);
    if (bytes.length !== size) throw new Rejection(place, 'the file ends inside this chunk');
    if (sha256Hex(bytes) !== chunk['sha256']) throw new Rejection(`${place}/sha256`, 'the bytes have another hash');
    at += size;
    return { bytes, records: countOf(chunk['records'], `${place}/records`, 1), no };
  });
  const last = decodeText(rest.subarray(at), '/end').replace(/\n$/, '');
  if (last !== `{"end":${end}}`) throw new Rejection('/end', 'the last line does not repeat the colophon');
  return chunks;
}

function* chunkEmbeddings(chunks: readonly Chunk[]): Generator<{ place: string; value: Json }> {
  for (const { bytes, records, no } of chunks) {
    const lines = decodeText(bytes, `/embeddings/chunks/${no}`).split('\n');
    if (lines.pop() !== '' || lines.length !== records)
      throw new Rejection(`/embeddings/chunks/${no}/records`, `expected ${lines.length}`);
    for (const [i, line] of lines.entries()) {
      const place = `/embeddings/chunks/${no}/${i}`;
      yield { place, value: readJson(line, place) };
    }
  }
}
