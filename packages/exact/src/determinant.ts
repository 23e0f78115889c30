/** Determinant of a square integer matrix by fraction-free elimination (Bareiss, Math. Comp. 22 (1968)). */
import type { ReadonlyBigMatrix } from './matrix.ts';

export function determinant(matrix: ReadonlyBigMatrix): bigint {
  const m = matrix.map((row) => [...row]);
  const n = m.length;
  let sign = 1n;
  let previous = 1n;
  for (let k = 0; k < n - 1; k += 1) {
    const pivot = m.findIndex((row, i) => i >= k && row[k] !== 0n);
    if (pivot < 0) return 0n;
    if (pivot !== k) {
      [m[k], m[pivot]] = [m[pivot]!, m[k]!];
      sign = -sign;
    }
    const top = m[k]!;
    for (let i = k + 1; i < n; i += 1) {
      const row = m[i]!;
      for (let j = k + 1; j < n; j += 1) row[j] = (row[j]! * top[k]! - row[k]! * top[j]!) / previous;
    }
    previous = top[k]!;
  }
  return n === 0 ? 1n : sign * m[n - 1]![n - 1]!;
}
