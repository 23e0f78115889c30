/**
 * The canonical writer. One object up to 10,000 embeddings and 8 MB, JSON lines with hashed chunks above
 * (FORMAT.md, sections 2, 6 and 9). Same parts, same bytes. A list above the bound is never held whole: each chunk is
 * handed over as soon as it is full.
 */
import type {
  CertificateClaim,
  CertificateEvidence,
  CertificateHead,
  CertificateLattice,
  ChunkEntry,
  FileInteger,
  IntegerMatrix,
  StringMatrix,
  TestResult,
} from './types.ts';
import { CERTIFICATE_FORMAT } from './types.ts';

/** SHA-256 in lower-case hexadecimal; handed in, so that this package needs no platform. */
export type Sha256 = (bytes: Uint8Array) => string;

/** Above this many basis vectors matrices are written sparse. */
const SPARSE_ABOVE = 200;
/** Above this many entries zero columns are left out. */
const DENSE_ENTRIES = 250_000;

/** Where one object ends and chunks begin. FORMAT.md, section 9. */
export interface WriterBounds {
  readonly oneObjectEmbeddings: number;
  readonly oneObjectBytes: number;
  readonly chunkBytes: number;
}

const FORMAT_BOUNDS: WriterBounds = {
  oneObjectEmbeddings: 10_000,
  oneObjectBytes: 8_000_000,
  chunkBytes: 1024 * 1024,
};

/** One embedding: N rows of its nonzero columns in canonical order, and the number of zero columns after them. */
export interface EmbeddingRecord {
  readonly rows: readonly (readonly bigint[])[];
  readonly zeros: number;
  readonly orbitSize: bigint;
  readonly tests: { readonly [name: string]: TestResult };
}

/** A number up to 2^53 − 1 in size, a string beyond. */
export function fileInteger(value: bigint): FileInteger {
  const small = Number(value);
  return Number.isSafeInteger(small) ? small : value.toString();
}

/** `matrix` (rows × columns) as FORMAT.md, section 4, writes it for a lattice with `basisVectors` basis vectors. */
export function stringMatrix(matrix: readonly (readonly bigint[])[], basisVectors: number): StringMatrix {
  if (basisVectors <= SPARSE_ABOVE) return matrix.map((row) => row.map(String));
  const entries: [number, number, string][] = [];
  matrix.forEach((row, i) =>
    row.forEach((x, j) => {
      if (x !== 0n) entries.push([i, j, x.toString()]);
    }),
  );
  return { size: [matrix.length, matrix[0]?.length ?? 0], entries };
}

function integerMatrix(rows: readonly (readonly bigint[])[], width: number): IntegerMatrix {
  if (rows.length <= SPARSE_ABOVE) {
    return rows.map((row) => Array.from({ length: width }, (_, j) => fileInteger(row[j] ?? 0n)));
  }
  const entries: [number, number, FileInteger][] = [];
  rows.forEach((row, i) =>
    row.forEach((x, j) => {
      if (x !== 0n) entries.push([i, j, fileInteger(x)]);
    }),
  );
  return { size: [rows.length, width], entries };
}

/** One embedding as it stands in the list. */
export function embeddingText(record: EmbeddingRecord): string {
  const columns = record.rows[0]?.length ?? 0;
  const leaveOut = record.rows.length * (columns + record.zeros) > DENSE_ENTRIES;
  return JSON.stringify({
    matrix: integerMatrix(record.rows, leaveOut ? columns : columns + record.zeros),
    ...(leaveOut ? { zeroColumns: record.zeros } : {}),
    orbitSize: record.orbitSize.toString(),
    tests: record.tests,
  });
}

export interface CertificateParts {
  readonly question: CertificateHead['question'];
  readonly lattice: CertificateLattice;
  readonly claim: CertificateClaim;
  readonly tests: { readonly [name: string]: TestResult };
  readonly evidence: CertificateEvidence;
}

export interface WriterOptions {
  /** Where a chunk goes once the list is known to be a large one: in order, each once, not held here any more. */
  readonly keep: (chunk: Uint8Array) => void;
  /** One object on one line whatever its size: nothing is given to `keep`. */
  readonly oneObject?: boolean;
  /** Other bounds than the format's, for trying the writer with small lists. */
  readonly bounds?: WriterBounds;
}

/** The file is `head`, then the chunks that `keep` was given, in order, then `last`. */
export interface WrittenFile {
  readonly head: Uint8Array;
  /** The line after the chunks; null for one object, which has none. */
  readonly last: Uint8Array | null;
}

/** Takes the embeddings in order, then writes the head. */
export class CertificateWriter {
  private readonly encoder = new TextEncoder();
  private readonly bounds: WriterBounds;
  /** Chunks that are held while the file may still be one object. */
  private held: { bytes: Uint8Array; records: number }[] = [];
  private readonly kept: ChunkEntry[] = [];
  private large = false;
  private lines: string[] = [];
  private lineBytes = 0;
  private records = 0;
  private totalBytes = 0;

  constructor(
    private readonly sha256: Sha256,
    private readonly options: WriterOptions,
  ) {
    this.bounds = options.bounds ?? FORMAT_BOUNDS;
  }

  add(record: EmbeddingRecord): void {
    const line = embeddingText(record);
    const bytes = line.length + 1; // ASCII only: matrices, decimal strings and our own words
    if (this.lineBytes > 0 && this.lineBytes + bytes > this.bounds.chunkBytes) this.closeChunk();
    this.lines.push(line);
    this.lineBytes += bytes;
    this.records += 1;
    this.totalBytes += bytes;
    if (this.large || this.options.oneObject === true) return;
    this.large = this.records > this.bounds.oneObjectEmbeddings || this.totalBytes > this.bounds.oneObjectBytes;
    if (this.large) this.handOver();
  }

  private closeChunk(): void {
    if (this.lines.length === 0) return;
    this.held.push({ bytes: this.encoder.encode(`${this.lines.join('\n')}\n`), records: this.lines.length });
    this.lines = [];
    this.lineBytes = 0;
    if (this.large) this.handOver();
  }

  private handOver(): void {
    for (const { bytes, records } of this.held) {
      this.kept.push({ sha256: this.sha256(bytes), records, bytes: bytes.length });
      this.options.keep(bytes);
    }
    this.held = [];
  }

  finish(parts: CertificateParts): WrittenFile {
    this.closeChunk();
    const body = this.encoder.encode(
      [
        `{"format":${JSON.stringify(CERTIFICATE_FORMAT)}`,
        `"question":${JSON.stringify(parts.question)}`,
        `"lattice":${JSON.stringify(parts.lattice)}`,
        `"claim":${JSON.stringify(parts.claim)}`,
        `"embeddings":${this.large ? JSON.stringify({ chunks: this.kept }) : this.list()}`,
        `"tests":${JSON.stringify(parts.tests)}`,
        `"evidence":${JSON.stringify(parts.evidence)}`,
      ].join(','),
    );
    const end = this.encoder.encode(`"end":${JSON.stringify({ records: this.records, sha256: this.sha256(body) })}}\n`);
    return { head: joined(body, COMMA, end), last: this.large ? joined(BRACE, end) : null };
  }

  private list(): string {
    const decoder = new TextDecoder();
    return `[${this.held.map((c) => decoder.decode(c.bytes).trimEnd().replaceAll('\n', ',')).join(',')}]`;
  }
}

const COMMA = Uint8Array.of(0x2c);
const BRACE = Uint8Array.of(0x7b);

function joined(...parts: readonly Uint8Array[]): Uint8Array {
  const out = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}
