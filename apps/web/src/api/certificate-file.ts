/**
 * Reads a certificate for the screen: the head at once, each embedding when it is looked at. Both forms of the file are
 * read: one object, or JSON lines (FORMAT.md, sections 2 and 9). Nothing is checked here; that is the checker's work.
 */
import type { Ground, Scope, Target, Verdict } from '@palmette/contracts';
import type { TestAnswer } from '@palmette/wording';

type FileInteger = number | string;

export interface SparseMatrix<T> {
  readonly size: readonly [number, number];
  readonly entries: readonly (readonly [number, number, T])[];
}
export type FileMatrix<T> = readonly (readonly T[])[] | SparseMatrix<T>;

export interface FileEmbedding {
  readonly matrix: FileMatrix<FileInteger>;
  readonly zeroColumns?: number;
  readonly orbitSize: string;
  readonly tests: Readonly<Record<string, TestAnswer>>;
}

export interface FileTree {
  readonly method: string;
  /** Null: columns that answer for any n. */
  readonly dimension: number | null;
  /** Of a tree of rows. */
  readonly nodes?: string;
  /** Of frames and columns: admissible columns up to sign. */
  readonly vectors?: string;
  /** Of frames by gluing: unimodular lattices. */
  readonly glued?: string;
  readonly orbits: string;
}

export interface FileExclusion {
  readonly dimension: number | null;
  readonly ground: Ground;
  readonly primes?: readonly string[];
  /** Of the ground `column`. */
  readonly vectors?: string;
  readonly spanned?: number;
  readonly tree?: FileTree;
}

export interface FileHead {
  readonly lattice: {
    readonly gram: FileMatrix<string>;
    readonly sign: 1 | -1;
    readonly orientation?: 'entered' | 'reversed';
    readonly rank: number;
    readonly nullity: number;
    readonly determinant: string;
    readonly radical: readonly (readonly string[])[];
  };
  readonly claim: {
    readonly verdict: Verdict;
    readonly ground: Ground | null;
    readonly target: Target;
    readonly scope: Scope;
    readonly dimension: number | null;
    readonly complete: boolean;
    readonly orbits?: string;
    readonly total?: string;
  };
  readonly tests: Readonly<Record<string, TestAnswer>>;
  readonly evidence: {
    readonly exclusions: readonly FileExclusion[];
    readonly list: FileTree | null;
    /** Present if a second opinion was asked for; null where none is possible or needed. */
    readonly second?: FileTree | null;
  };
  readonly end: { readonly records: number; readonly sha256: string };
}

/** What a page needs of a certificate, wherever it is held: here, or in a worker. */
export interface CertificateView {
  readonly head: FileHead;
  /** Embeddings in the file. */
  readonly count: number;
  /** Embeddings from `from` up to, and without, `to`. */
  page(from: number, to: number): Promise<readonly FileEmbedding[]>;
  close(): void;
}

/** The file does not have the shape of a certificate of this version. */
export class UnreadableCertificate extends Error {
  override readonly name = 'UnreadableCertificate';
}

interface WholeFile extends FileHead {
  readonly format: string;
  readonly embeddings: readonly FileEmbedding[] | { readonly chunks: readonly unknown[] };
}

export class CertificateFile implements CertificateView {
  private constructor(
    readonly head: FileHead,
    readonly count: number,
    private readonly at: (no: number) => FileEmbedding,
  ) {}

  /** @param bytes uncompressed @throws UnreadableCertificate */
  static read(bytes: Uint8Array): CertificateFile {
    const text = new TextDecoder('utf-8').decode(bytes);
    const firstEnd = text.indexOf('\n');
    const whole = parse(firstEnd === -1 ? text : text.slice(0, firstEnd)) as WholeFile;
    if (whole?.format !== 'palmette.certificate/1')
      throw new UnreadableCertificate('This file is no certificate that this page can read.');
    const { embeddings, ...head } = whole;
    if ('chunks' in embeddings) {
      const starts = lineStarts(text, firstEnd + 1, head.end.records);
      return new CertificateFile(
        head,
        starts.length,
        (no) => parse(text.slice(starts[no], text.indexOf('\n', starts[no]))) as FileEmbedding,
      );
    }
    return new CertificateFile(head, embeddings.length, (no) => embeddings[no]!);
  }

  page(from: number, to: number): Promise<readonly FileEmbedding[]> {
    const last = Math.min(to, this.count);
    return Promise.resolve(Array.from({ length: Math.max(0, last - from) }, (_, i) => this.at(from + i)));
  }

  close(): void {
    // Nothing is held open.
  }
}

function parse(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    throw new UnreadableCertificate('This file is no certificate that this page can read.', { cause: error });
  }
}

function lineStarts(text: string, from: number, records: number): number[] {
  const starts: number[] = [];
  for (let at = from; starts.length < records && at < text.length;) {
    starts.push(at);
    const end = text.indexOf('\n', at);
    if (end === -1) break;
    at = end + 1;
  }
  return starts;
}

/** Rows of a matrix that may be written sparse, all entries in place. */
export function denseRows<T>(matrix: FileMatrix<T>, zero: T): readonly (readonly T[])[] {
  if (!('size' in matrix)) return matrix;
  const rows = Array.from({ length: matrix.size[0] }, () => new Array<T>(matrix.size[1]).fill(zero));
  for (const [i, j, x] of matrix.entries) rows[i]![j] = x;
  return rows;
}

/** Rows and columns. */
export function sizeOf(matrix: FileMatrix<unknown>): readonly [number, number] {
  return 'size' in matrix ? matrix.size : [matrix.length, matrix[0]?.length ?? 0];
}
