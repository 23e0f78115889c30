/**
 * Least vectors of a positive definite form, exactly: the listing of integer points with the Gram–Schmidt data of the
 * form itself, last basis vector first (Fincke–Pohst). Every list is up to sign and in coordinates of the given basis.
 */
import type { ReadonlyBigMatrix } from '@palmette/exact';
import { AUTOMORPHISM_BOUNDS, BeyondBound } from './automorphism-bounds.ts';
import { listIntegerPoints, type Projections } from './integer-points.ts';

export interface LeastVectors {
  readonly norm: bigint;
  readonly vectors: bigint[][];
}

export interface LeastOptions {
  /** Norm of some vector that is wanted. */
  readonly bound: bigint;
  /** Which vectors are wanted; all of them if absent. */
  readonly wanted?: (vector: readonly bigint[]) => boolean;
  /** Only vectors whose last coordinate is 1: the coset of the last basis vector. */
  readonly coset?: boolean;
  /** How many more vectors there may be. */
  readonly maxVectors: number;
  readonly budget: StepBudget;
}

/** Steps left, shared by several listings. */
export class StepBudget {
  constructor(
    public left: number,
    private readonly total = left,
  ) {}

  spend(steps: number, enough: boolean): void {
    this.left -= steps;
    if (!enough) throw new BeyondBound(`listing short vectors takes more than ${this.total} steps`);
  }
}

/**
 * All wanted vectors of the least norm. Each time a shorter one appears the listing starts again with its norm as bound.
 * @throws BeyondBound
 */
export function leastVectors(
  gram: ReadonlyBigMatrix,
  { bound, wanted, coset = false, maxVectors, budget }: LeastOptions,
): LeastVectors {
  const form = gramSchmidt(gram);
  let norm = bound;
  let vectors: bigint[][] = [];
  for (let settled = false; !settled;) {
    vectors = [];
    const { end, steps } = listIntegerPoints(
      form,
      { bound: norm, maxSteps: budget.left, leadOne: coset },
      (point, left) => {
        const vector = point.toReversed();
        if (wanted !== undefined && !wanted(vector)) return false;
        if (left > 0n) {
          norm -= left;
          return true;
        }
        vectors.push(vector);
        return vectors.length > maxVectors;
      },
    );
    budget.spend(steps, end !== 'too many');
    if (vectors.length > maxVectors) throw tooManyVectors();
    settled = end === 'listed';
  }
  return { norm, vectors };
}

/** The bound on vectors is one for all layers together. */
export function tooManyVectors(): BeyondBound {
  return new BeyondBound(`more than ${AUTOMORPHISM_BOUNDS.vectors} short vectors up to sign`);
}

/** Leading minors and the integers λ_ji = d_(i+1)·μ_ji (Cohen, section 2.6.3), in the order of the listing. */
function gramSchmidt(gram: ReadonlyBigMatrix): Projections {
  const rank = gram.length;
  const minors = [1n];
  const lambda: bigint[][] = [];
  for (let k = 0; k < rank; k += 1) {
    const row: bigint[] = [];
    for (let j = 0; j <= k; j += 1) {
      let u = gram[k]![j]!;
      const other = j === k ? row : lambda[j]!;
      for (let i = 0; i < j; i += 1) u = (minors[i + 1]! * u - row[i]! * other[i]!) / minors[i]!;
      row.push(u);
    }
    if (row[k]! <= 0n) throw new RangeError('expected a positive definite form');
    minors.push(row[k]!);
    lambda.push(row);
  }
  return {
    scales: minors.toReversed(),
    projections: Array.from({ length: rank }, (_, t) =>
      Array.from({ length: t }, (_, s) => -lambda[rank - 1 - s]![rank - 1 - t]!),
    ),
  };
}
