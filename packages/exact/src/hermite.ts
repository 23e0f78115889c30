/**
 * Row-style Hermite normal form: H = T·M with T unimodular, pivots positive, entries above a pivot reduced.
 * Cohen, A Course in Computational Algebraic Number Theory, section 2.4.
 */
import { abs, floorDivide } from './integers.ts';
import type { BigMatrix, ReadonlyBigMatrix } from './matrix.ts';

/** The nonzero rows of the Hermite form: a basis of the row lattice. */
export function hermiteBasis(matrix: ReadonlyBigMatrix): BigMatrix {
  const m = matrix.map((row) => [...row]);
  const columns = m[0]?.length ?? 0;
  let top = 0;
  for (let j = 0; j < columns && top < m.length; j += 1) {
    for (;;) {
      const rows = m.flatMap((row, i) => (i >= top && row[j] !== 0n ? [i] : []));
      if (rows.length === 0) break;
      const least = rows.reduce((best, i) => (abs(m[i]![j]!) < abs(m[best]![j]!) ? i : best));
      [m[top], m[least]] = [m[least]!, m[top]!];
      if (rows.length === 1) break;
      for (let i = top + 1; i < m.length; i += 1) reduceRow(m[i]!, m[top]!, j, m[i]![j]! / m[top]![j]!);
    }
    const pivot = m[top]![j]!;
    if (pivot === 0n) continue;
    if (pivot < 0n) m[top] = m[top]!.map((x) => -x);
    for (let i = 0; i < top; i += 1) reduceRow(m[i]!, m[top]!, j, floorDivide(m[i]![j]!, m[top]![j]!));
    top += 1;
  }
  return m.slice(0, top);
}

function reduceRow(row: bigint[], by: readonly bigint[], from: number, q: bigint): void {
  if (q === 0n) return;
  for (let j = from; j < row.length; j += 1) row[j]! -= q * by[j]!;
}
