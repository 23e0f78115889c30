/**
 * Splitting off a sublattice: a unimodular matrix whose last columns are a basis of all integer vectors in the span
 * of given ones. Column operations of Euclid's algorithm, smallest entries first; both the matrix and its inverse
 * are carried along, so that no inversion is needed and a reader can multiply them.
 */
import { abs } from './integers.ts';
import { identityMatrix, transpose, type BigMatrix, type ReadonlyBigMatrix } from './matrix.ts';

export interface Splitting {
  /** N × N, unimodular; its last k columns are a basis of the saturation of the span. */
  readonly matrix: BigMatrix;
  readonly inverse: BigMatrix;
}

/** @param vectors k independent integer vectors of length N, as rows */
export function splitOff(vectors: ReadonlyBigMatrix, size: number): Splitting {
  const k = vectors.map((row) => [...row]);
  // k·y keeps its span; y and its inverse are built from elementary operations, stored by columns and by rows
  const yColumns = identityMatrix(size);
  const inverse = identityMatrix(size);
  const used: number[] = [];
  for (const row of k) {
    const active = () => row.flatMap((x, j) => (x !== 0n && !used.includes(j) ? [j] : []));
    for (let columns = active(); columns.length > 1; columns = active()) {
      const pivot = columns.reduce((best, j) => (abs(row[j]!) < abs(row[best]!) ? j : best));
      for (const j of columns) {
        if (j === pivot) continue;
        const q = row[j]! / row[pivot]!;
        if (q === 0n) continue;
        for (const other of k) other[j]! -= q * other[pivot]!;
        subtractMultiple(yColumns[j]!, yColumns[pivot]!, q);
        subtractMultiple(inverse[pivot]!, inverse[j]!, -q);
      }
    }
    used.push(active()[0]!);
  }
  const order = [...Array.from({ length: size }, (_, j) => j).filter((j) => !used.includes(j)), ...used];
  return { matrix: transpose(order.map((j) => inverse[j]!)), inverse: order.map((j) => yColumns[j]!) };
}

function subtractMultiple(target: bigint[], source: readonly bigint[], q: bigint): void {
  source.forEach((x, i) => {
    if (x !== 0n) target[i]! -= q * x;
  });
}
