/**
 * Admissible columns of a positive definite form W (rule D of FORMAT.md): all c ≠ 0 up to sign with cᵀW⁻¹c ≤ 1, listed
 * entry by entry as in Fincke–Pohst (Math. Comp. 44 (1985)), in integers throughout. With d_k the leading minors and
 * F_k = det(W_k − c·cᵀ) for the first k rows, F_(k+1) = (d_(k+1)·F_k − u²)/d_k, where u = d_k·c_(k+1) − p_k·(c_1 … c_k)
 * and p_k = d_k·W_k⁻¹·(the first k entries of column k + 1). An admissible c has every F_k ≥ 0.
 */
import { dot, floorDivide, gcd, integerSqrt, type ReadonlyBigMatrix } from '@palmette/exact';

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
  const rank = gram.length;
  if (rank === 0) return 'listed';
  const { minors, projections } = successiveProjections(gram);
  const column = new Array<bigint>(rank).fill(0n);
  /** Values still to be tried at each place, and F before it. */
  const next = new Array<bigint>(rank).fill(0n);
  const last = new Array<bigint>(rank).fill(0n);
  const residual = new Array<bigint>(rank + 1).fill(1n);
  const shift = new Array<bigint>(rank).fill(0n);
  /** Number of nonzero entries before each place: while it is 0 only values ≥ 0 are tried. */
  const nonzero = new Array<number>(rank + 1).fill(0);
  let steps = 0;

  const enter = (k: number) => {
    shift[k] = dot(projections[k]!, column.slice(0, k));
    const reach = integerSqrt(minors[k + 1]! * residual[k]!);
    const low = nonzero[k] === 0 ? 0n : -floorDivide(reach - shift[k]!, minors[k]!);
    next[k] = low;
    last[k] = floorDivide(reach + shift[k]!, minors[k]!);
  };

  let k = 0;
  enter(0);
  while (k >= 0) {
    if (next[k]! > last[k]!) {
      k -= 1;
      continue;
    }
    steps += 1;
    if (steps > maxSteps) return 'too many';
    const value = next[k]!;
    // F_r = 0 only at the ends of the range
    next[k] = unitOnly && k + 1 === rank && value < last[k]! ? last[k]! : value + 1n;
    column[k] = value;
    const u = minors[k]! * value - shift[k]!;
    const left = (minors[k + 1]! * residual[k]! - u * u) / minors[k]!;
    nonzero[k + 1] = nonzero[k]! + (value === 0n ? 0 : 1);
    if (k + 1 < rank) {
      k += 1;
      residual[k] = left;
      enter(k);
    } else if (nonzero[rank]! > 0 && (!unitOnly || left === 0n) && visit(column)) return 'stopped';
  }
  return 'listed';
}

/** Leading minors d_0 = 1, …, d_r and the integer vectors p_k, by bordering. */
function successiveProjections(gram: ReadonlyBigMatrix): { minors: bigint[]; projections: bigint[][] } {
  const rank = gram.length;
  const minors = [1n];
  const projections: bigint[][] = [];
  // triangle[i] solves the i-th row against the rows before it: d_i·e_i − p_i, orthogonal to them
  const triangle: bigint[][] = [];
  for (let k = 0; k < rank; k += 1) {
    const row = gram[k]!;
    let p = new Array<bigint>(k).fill(0n); // d_i·(projection of row k on the first i rows), i growing
    for (let i = 0; i < k; i += 1) {
      const t = triangle[i]!;
      const inner = dot(t, row.slice(0, i + 1));
      p = p.map((x, j) => (minors[i + 1]! * x + inner * (t[j] ?? 0n)) / minors[i]!);
    }
    projections.push(p);
    triangle.push([...p.map((x) => -x), minors[k]!]);
    const minor = minors[k]! * row[k]! - dot(p, row.slice(0, k));
    if (minor <= 0n) throw new RangeError('expected a positive definite form');
    minors.push(minor);
  }
  return { minors, projections };
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
