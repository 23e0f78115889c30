/** Inverse of a nonsingular integer matrix as adjugate over determinant, by fraction-free Gauss–Jordan elimination. */
import type { BigMatrix, ReadonlyBigMatrix } from './matrix.ts';

export interface RationalInverse {
  /** `numerator` / `denominator` is the inverse; the denominator is the determinant. */
  readonly numerator: BigMatrix;
  readonly denominator: bigint;
}

/** @throws RangeError if the matrix is singular */
export function inverse(matrix: ReadonlyBigMatrix): RationalInverse {
  const n = matrix.length;
  const m = matrix.map((row, i) => [...row, ...Array.from({ length: n }, (_, j) => (i === j ? 1n : 0n))]);
  let previous = 1n;
  for (let k = 0; k < n; k += 1) {
    const pivot = m.findIndex((row, i) => i >= k && row[k] !== 0n);
    if (pivot < 0) throw new RangeError('expected a nonsingular matrix');
    if (pivot !== k) [m[k], m[pivot]] = [m[pivot]!, m[k]!.map((x) => -x)];
    const top = m[k]!;
    const p = top[k]!;
    for (let i = 0; i < n; i += 1) {
      if (i === k) continue;
      const row = m[i]!;
      const factor = row[k]!;
      for (let j = 0; j < 2 * n; j += 1) row[j] = (row[j]! * p - factor * top[j]!) / previous;
    }
    previous = p;
  }
  return { numerator: m.map((row) => row.slice(n)), denominator: n === 0 ? 1n : previous };
}
