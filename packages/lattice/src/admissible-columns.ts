/**
 * Admissible columns of a positive definite form W (rule D of FORMAT.md): all c ≠ 0 up to sign with cᵀW⁻¹c ≤ 1. Listed
 * as integer points with the leading minors d_k as scales and p_k = d_k·W_k⁻¹·(the first k entries of column k + 1);
 * then F_k = det(W_k − c·cᵀ) for the first k rows.
 */
import { dot, gcd, type ReadonlyBigMatrix } from '@palmette/exact';
import { listIntegerPoints, type Projections } from './integer-points.ts';

export interface ColumnListing {
  /** Only those with cᵀW⁻¹c = 1, which are all that occur at n = rank. */
  readonly unitOnly: boolean;
  /** Entries tried, over all places, before the listing gives up. */
  readonly maxSteps: number;
}

/**
 * Calls `visit` with each admissible column, its first nonzero entry positive; the array is reused between calls.
 * `visit` ends the listing by returning true.
 * @param gram r × r, positive definite; an LLL-reduced one keeps the listing short
 * @returns 'listed', 'stopped' by the visitor, or 'too many' where `maxSteps` did not suffice
 * @throws RangeError if the form is not positive definite
 */
export function listAdmissibleColumns(
  gram: ReadonlyBigMatrix,
  { unitOnly, maxSteps }: ColumnListing,
  visit: (column: readonly bigint[]) => boolean,
): 'listed' | 'stopped' | 'too many' {
  return listIntegerPoints(dualProjections(gram), { bound: 1n, onlyBound: unitOnly, maxSteps }, visit).end;
}

/** Leading minors d_0 = 1, …, d_r and the integer vectors p_k, by bordering. */
function dualProjections(gram: ReadonlyBigMatrix): Projections {
  const scales = [1n];
  const projections: bigint[][] = [];
  // normals[i] = d_i·e_i − p_i: its inner products with the rows before row i are 0
  const normals: bigint[][] = [];
  for (const [k, row] of gram.entries()) {
    let p = new Array<bigint>(k).fill(0n); // d_i·(projection of row k on the first i rows), i growing
    for (const [i, normal] of normals.entries()) {
      const inner = dot(normal, row);
      p = p.map((x, j) => (scales[i + 1]! * x + inner * (normal[j] ?? 0n)) / scales[i]!);
    }
    projections.push(p);
    normals.push([...p.map((x) => -x), scales[k]!]);
    const minor = scales[k]! * row[k]! - dot(p, row);
    if (minor <= 0n) throw new RangeError('expected a positive definite form');
    scales.push(minor);
  }
  return { scales, projections };
}

/** Dimension of the span of the columns added so far, kept as an echelon basis without fractions. */
export class Span {
  private readonly rows: { readonly lead: number; readonly row: bigint[] }[] = [];

  get dimension(): number {
    return this.rows.length;
  }

  /** @returns true if the vector was independent of the ones before it */
  add(vector: readonly bigint[]): boolean {
    let v = [...vector];
    for (const { lead, row } of this.rows) {
      const [x, y] = [v[lead]!, row[lead]!];
      if (x !== 0n) v = v.map((z, j) => y * z - x * row[j]!);
    }
    const lead = v.findIndex((x) => x !== 0n);
    if (lead < 0) return false;
    const content = v.reduce(gcd, 0n);
    this.rows.push({ lead, row: v.map((x) => x / content) });
    return true;
  }
}
