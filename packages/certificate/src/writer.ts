/**
 * The canonical writer. One object up to 10,000 embeddings and 8 MB, JSON lines with hashed chunks above
 * (FORMAT.md, sections 2, 6 and 9). Same parts, same bytes.
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
const ONE_OBJECT_EMBEDDINGS = 10_000;
const ONE_OBJECT_BYTES = 8_000_000;
const CHUNK_BYTES = 1024 * 1024;

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

/** Collects the embeddings in order, then writes the file. */
export class CertificateWriter {
  private readonly encoder = new TextEncoder();
  private readonly chunks: { bytes: Uint8Array; records: number }[] = [];
  private lines: string[] = [];
  private lineBytes = 0;
  private records = 0;
  private totalBytes = 0;

  /** @param oneObject keep one object on one line whatever its size */
  constructor(
    private readonly sha256: Sha256,
    private readonly oneObject = false,
  ) {}

  add(record: EmbeddingRecord): void {
    const line = embeddingText(record);
    const bytes = line.length + 1; // ASCII only: matrices, decimal strings and our own words
    if (this.lineBytes > 0 && this.lineBytes + bytes > CHUNK_BYTES) this.closeChunk();
    this.lines.push(line);
    this.lineBytes += bytes;
    this.records += 1;
    this.totalBytes += bytes;
  }

  private closeChunk(): void {
    if (this.lines.length === 0) return;
    this.chunks.push({ bytes: this.encoder.encode(`${this.lines.join('\n')}\n`), records: this.lines.length });
    this.lines = [];
    this.lineBytes = 0;
  }

  /** The file's bytes, to be written one after the other. */
  finish(parts: CertificateParts): Uint8Array[] {
    this.closeChunk();
    const large = !this.oneObject && (this.records > ONE_OBJECT_EMBEDDINGS || this.totalBytes > ONE_OBJECT_BYTES);
    const embeddings = large
      ? JSON.stringify({
          chunks: this.chunks.map((c): ChunkEntry => ({
            sha256: this.sha256(c.bytes),
            records: c.records,
            bytes: c.bytes.length,
          })),
        })
      : `[${this.chunks.map((c) => new TextDecoder().decode(c.bytes).trimEnd().replaceAll('\n', ',')).join(',')}]`;
    const body = this.encoder.encode(
      [
        `{"format":${JSON.stringify(CERTIFICATE_FORMAT)}`,
        `"question":${JSON.stringify(parts.question)}`,
        `"lattice":${JSON.stringify(parts.lattice)}`,
        `"claim":${JSON.stringify(parts.claim)}`,
        `"embeddings":${embeddings}`,
        `"tests":${JSON.stringify(parts.tests)}`,
        `"evidence":${JSON.stringify(parts.evidence)}`,
      ].join(','),
    );
    const end = `"end":${JSON.stringify({ records: this.records, sha256: this.sha256(body) })}}\n`;
    const head = [body, this.encoder.encode(`,${end}`)];
    return large ? [...head, ...this.chunks.map((c) => c.bytes), this.encoder.encode(`{${end}`)] : head;
  }
}
