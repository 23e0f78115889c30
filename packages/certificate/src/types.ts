/** The certificate as FORMAT.md defines it, member by member in its order. */

/** A JSON number up to 2^53 − 1 in size, a decimal string beyond. */
export type FileInteger = number | string;

/** Rows of strings, or sparse above 200 basis vectors. FORMAT.md, section 4. */
export type StringMatrix =
  | readonly (readonly string[])[]
  | { readonly size: readonly [number, number]; readonly entries: readonly (readonly [number, number, string])[] };

/** Rows of integers, or sparse above 200 basis vectors. FORMAT.md, section 6. */
export type IntegerMatrix =
  | readonly (readonly FileInteger[])[]
  | { readonly size: readonly [number, number]; readonly entries: readonly (readonly [number, number, FileInteger])[] };

export interface CertificateLattice {
  readonly gram: StringMatrix;
  readonly sign: 1 | -1;
  readonly orientation?: 'entered' | 'reversed';
  readonly rank: number;
  readonly nullity: number;
  readonly determinant: string;
  readonly radical: readonly (readonly string[])[];
}

export type CertificateTarget =
  | { readonly dimension: number }
  | { readonly excess: number }
  | { readonly least: { readonly upTo?: number | undefined } }
  | { readonly any: true };

export interface CertificateClaim {
  readonly verdict: 'embeds' | 'excluded' | 'open';
  readonly ground: 'embedding' | 'exhaustion' | 'dimension' | 'determinant' | 'hilbert' | 'column' | null;
  readonly target: CertificateTarget;
  readonly scope: 'one' | 'all';
  readonly dimension: number | null;
  readonly complete: boolean;
  readonly orbits?: string;
  readonly total?: string;
}

export type TestResult = { readonly [key: string]: unknown } | string;

export interface CertificateEmbedding {
  readonly matrix: IntegerMatrix;
  readonly zeroColumns?: number;
  readonly orbitSize: string;
  readonly tests: { readonly [name: string]: TestResult };
}

export type TreeBasis = null | { readonly matrix: StringMatrix; readonly inverse: StringMatrix };

/** The tree of rows: revision 1 in a fixed order, revision 2 with the row chosen at each node. FORMAT.md, section 7. */
export interface RowsTree {
  readonly method: 'rows';
  readonly revision: 1 | 2;
  readonly dimension: number;
  readonly basis: TreeBasis;
  readonly order: readonly number[];
  readonly nodes: string;
  readonly orbits: string;
}

/** The trees of frames and of columns, revision 1. FORMAT.md, section 7. */
export interface VectorsTree {
  readonly method: 'frames' | 'columns';
  readonly revision: 1;
  /** Null: a tree of columns for every n. */
  readonly dimension: number | null;
  readonly basis: TreeBasis;
  readonly vectors: string;
  readonly orbits: string;
}

/** The tree of frames, revision 2: gluing. FORMAT.md, section 7. */
export interface GluedTree {
  readonly method: 'frames';
  readonly revision: 2;
  readonly dimension: number;
  readonly basis: TreeBasis;
  /** Primes of the determinant, ascending. */
  readonly primes: readonly string[];
  /** Unimodular lattices that were looked at. */
  readonly glued: string;
  readonly orbits: string;
}

export type Tree = RowsTree | VectorsTree | GluedTree;

export type Exclusion =
  | { readonly dimension: number; readonly ground: 'dimension' }
  | { readonly dimension: number; readonly ground: 'determinant' }
  | { readonly dimension: number; readonly ground: 'hilbert'; readonly primes: readonly string[] }
  | {
      readonly dimension: number | null;
      readonly ground: 'column';
      readonly basis: TreeBasis;
      readonly vectors: string;
      readonly spanned: number;
    }
  | { readonly dimension: number | null; readonly ground: 'exhaustion'; readonly tree: Tree };

export interface CertificateEvidence {
  readonly exclusions: readonly Exclusion[];
  readonly list: Tree | null;
  /** Present where the question asks for a second opinion. */
  readonly second?: Tree | null;
}

export interface ChunkEntry {
  readonly sha256: string;
  readonly records: number;
  readonly bytes: number;
}

export interface CertificateHead {
  readonly format: 'palmette.certificate/1';
  /** The canonical question; its shape is given by contracts and re-read by the checker. */
  readonly question: { readonly [key: string]: unknown };
  readonly lattice: CertificateLattice;
  readonly claim: CertificateClaim;
  readonly embeddings: readonly CertificateEmbedding[] | { readonly chunks: readonly ChunkEntry[] };
  readonly tests: { readonly [name: string]: TestResult };
  readonly evidence: CertificateEvidence;
}

export interface Colophon {
  readonly records: number;
  readonly sha256: string;
}

export const CERTIFICATE_FORMAT = 'palmette.certificate/1';
