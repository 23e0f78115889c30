/** What the page and the preview's worker say to each other. Big integers travel as decimal strings. */
import type { Scope, Source, Target } from '@palmette/contracts';
import type { ArithmeticGround, ColumnGround } from '@palmette/lattice';
import type { GraphEdge } from '@palmette/drawing';

export interface PreviewOrder {
  readonly source: Source;
  readonly target: Target;
  readonly scope: Scope;
}

/** Where a source is refused: a JSON Pointer inside it, and expectation with finding. */
export interface PreviewFault {
  readonly path: string;
  readonly message: string;
}

/** The other orientation, colouring or chain of the same object. */
export interface OtherSide {
  readonly sentence: string;
  /** Left out where it has no definite lattice. */
  readonly source?: Source;
}

export interface SourceReading {
  readonly label: string;
  readonly rank: number;
  readonly nullity: number;
  /** “negative definite”. */
  readonly definiteness: string;
  readonly determinant: string;
  readonly names: readonly string[];
  /** Diagonal, as typed. */
  readonly weights: readonly string[];
  /** Null: no picture. */
  readonly edges: readonly GraphEdge[] | null;
  /** The form as typed, or null where it is too big to be shown. */
  readonly form: readonly (readonly string[])[] | null;
  readonly remarks: readonly string[];
  /** “e_0 = −2; legs 3/2, 5/4, 7/1” of a star. */
  readonly star: string | null;
  readonly radical: readonly (readonly string[])[] | null;
  readonly other: OtherSide | null;
}

export interface DimensionGround {
  /** Null: every Z^n. */
  readonly dimension: number | null;
  readonly ground: ArithmeticGround | ColumnGround;
}

/** What arithmetic says before any search. */
export interface ArithmeticReading {
  /** Every dimension that arithmetic excludes on the way to the target. */
  readonly excluded: readonly DimensionGround[];
  /** Why no Z^n at all holds the lattice, whatever the target is. */
  readonly nowhere: ColumnGround | null;
  /** The target itself is settled by it. */
  readonly settled: boolean;
  /** Where a search would begin; null if settled or for any n. */
  readonly next: number | null;
}

/** The quick look: a search that is bounded and not certified. */
export type QuickLook =
  | { readonly kind: 'none'; readonly why: string }
  | {
      readonly kind: 'done';
      readonly verdict: 'embeds' | 'excluded';
      readonly dimension: number | null;
      readonly complete: boolean;
      readonly orbits: string;
      readonly nodes: string;
      readonly ms: number;
      /** The first embedding, in the rows of the source; zero columns left out. */
      readonly first: { readonly matrix: readonly (readonly string[])[]; readonly zeroColumns: number } | null;
    }
  | {
      readonly kind: 'unfinished';
      /** Null for any n. */
      readonly dimension: number | null;
      readonly orbits: string;
      readonly nodes: string;
      readonly ms: number;
      /** CPU time of the whole tree in seconds, 8 times in 10; null where nothing sensible can be said. */
      readonly seconds: { readonly low: number; readonly likely: number; readonly high: number } | null;
      /** The methods that the estimate compares. */
      readonly tried: readonly string[];
      readonly first: { readonly matrix: readonly (readonly string[])[]; readonly zeroColumns: number } | null;
    };

export type PreviewReport =
  | { readonly kind: 'fault'; readonly fault: PreviewFault }
  | { readonly kind: 'read'; readonly reading: SourceReading }
  | { readonly kind: 'group'; readonly divisors: readonly string[] }
  | { readonly kind: 'arithmetic'; readonly arithmetic: ArithmeticReading }
  | { readonly kind: 'quick'; readonly quick: QuickLook }
  | { readonly kind: 'end' };
