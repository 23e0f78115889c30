/**
 * What the projection bound needs of a form, once for all its nodes: the leading minors D_k of the working Gram in the
 * order of its rows, and for each row its projection on the span of the rows before it. Computed exactly; given in
 * doubles only if the integers of `projection-listing.ts` are proved to come out exact.
 */
import { integerSqrt } from '@palmette/exact';

export interface ProjectionForm {
  /** D_0 = 1, …, D_r: the minor of the first k rows. */
  readonly minors: Float64Array;
  /** Row k is Σ shadow[k][i] / D_k · row i on the span of the rows i < k. */
  readonly shadows: readonly Float64Array[];
}

const EXACT = 2n ** 52n;
const LARGEST = 2n ** 47n;

/** Above this rank the minors are not computed: the trees that are left to search by then are sparse. */
export const PROJECTED_RANK = 64;

/**
 * @param gram r × r, positive definite, rows in the order of the tree
 * @returns null where doubles could not be proved exact
 */
export function projectionForm(gram: readonly (readonly bigint[])[]): ProjectionForm | null {
  const rank = gram.length;
  if (rank > PROJECTED_RANK) return null;
  const { minors, shadows } = eliminate(gram);
  for (let k = 0; k < rank; k += 1) {
    if (!exactAt(minors[k]!, minors[k + 1]!, gram[k]![k]!)) return null;
    const reach = shadows[k]!.reduce((sum, x, i) => sum + (x < 0n ? -x : x) * (integerSqrt(gram[i]![i]!) + 1n), 0n);
    if (reach >= EXACT) return null;
  }
  return { minors: Float64Array.from(minors, Number), shadows: shadows.map((row) => Float64Array.from(row, Number)) };
}

/**
 * Why doubles are exact, with D = D_k, D' = D_{k+1}, w the norm of row k. Minors of a projection lie between −1 and 1, so
 * every g stays within e ≤ D; a centre is e times an entry of a vector no longer than √w; y = c − e·x has y² ≤ e'·A; what
 * is left, A, stays within D'. All quotients are integers of the form (p·a + q·b)/e with |p|, |q| ≤ e (in the step to the
 * child: with both summands over e within D'), computed as (p·a + q·b)·(1/e): the roundings put the computed value off by
 * less than 5·2^−53·(|a| + |b|) < 1/2 where |a|, |b| ≤ 2^48: rounded to the nearest integer it is right.
 */
function exactAt(d: bigint, dNext: bigint, norm: bigint): boolean {
  return d * (integerSqrt(norm) + 1n) <= LARGEST && dNext <= LARGEST;
}

/** Fraction-free elimination of [gram | 1]: row k is then D_k·(row k of the inverse of the unit lower factor). */
function eliminate(gram: readonly (readonly bigint[])[]): { minors: bigint[]; shadows: bigint[][] } {
  const rank = gram.length;
  const m = gram.map((row, i) => [...row, ...row.map((_, j) => (i === j ? 1n : 0n))]);
  const minors = [1n];
  for (let k = 0; k < rank; k += 1) {
    const pivot = m[k]![k]!;
    const before = minors[k]!;
    for (let i = k + 1; i < rank; i += 1) {
      const factor = m[i]![k]!;
      for (let j = k + 1; j <= rank + i; j += 1) m[i]![j] = (pivot * m[i]![j]! - factor * m[k]![j]!) / before;
    }
    minors.push(pivot);
  }
  return { minors, shadows: m.map((row, k) => row.slice(rank, rank + k).map((x) => -x)) };
}
