/** From an orbit in the working Gram to an embedding in the basis of the source, and the basis that a certificate names. */
import { lllGram, multiply, transpose, type BigMatrix, type ReadonlyBigMatrix } from '@palmette/exact';
import type { FoundOrbit } from './found.ts';
import { fromPlanMatrix, type Plan } from './plan.ts';

export interface Basis {
  readonly matrix: BigMatrix;
  readonly inverse: BigMatrix;
}

export interface Embedding {
  /** N rows of the nonzero columns, in canonical order (FORMAT.md, section 6). */
  readonly rows: BigMatrix;
  readonly zeros: number;
}

const bases = new WeakMap<Plan, Map<Basis | null, Basis | null>>();

/**
 * The basis of the tree: U and V with U·V = 1 and Uᵀ·gram·U = W ⊕ 0; null is the identity.
 * @param radical the basis that splits the radical off, from lattice's reducedBasis
 */
export function treeBasis(plan: Plan, radical: Basis | null): Basis | null {
  const known = bases.get(plan) ?? new Map<Basis | null, Basis | null>();
  bases.set(plan, known);
  if (!known.has(radical)) known.set(radical, composeBasis(plan, radical));
  return known.get(radical)!;
}

function composeBasis(plan: Plan, radical: Basis | null): Basis | null {
  if (plan.change === null) return radical;
  const change = { matrix: fromPlanMatrix(plan.change.matrix), inverse: fromPlanMatrix(plan.change.inverse) };
  return composeBases(change, radical);
}

/** A change of the reduced lattice's basis, after the basis that splits the radical off (null: nothing to split off). */
export function composeBases(change: Basis, radical: Basis | null): Basis {
  if (radical === null) return change;
  const size = radical.matrix.length;
  const widen = (m: BigMatrix): BigMatrix =>
    Array.from({ length: size }, (_, i) =>
      Array.from({ length: size }, (_, j) => m[i]?.[j] ?? (i === j && i >= m.length ? 1n : 0n)),
    );
  return {
    matrix: multiply(radical.matrix, widen(change.matrix)),
    inverse: multiply(widen(change.inverse), radical.inverse),
  };
}

/** A basis of short vectors (LLL) of a reduced lattice: its Gram matrix, and how it is reached from the source's basis. */
export function shortBasis(
  gram: ReadonlyBigMatrix,
  radical: Basis | null,
): { readonly gram: BigMatrix; readonly basis: Basis } {
  const reduction = lllGram(gram);
  return {
    gram: reduction.gram,
    basis: composeBases({ matrix: reduction.change, inverse: reduction.inverse }, radical),
  };
}

/** The embedding A with A·Aᵀ = gram: A = Vᵀ·(B over zero rows). */
export function embeddingMatrix(plan: Plan, found: FoundOrbit, radical: Basis | null): Embedding {
  const basis = treeBasis(plan, radical);
  const rank = plan.order.length;
  const back = basis === null ? null : transpose(basis.inverse).map((row) => row.slice(0, rank));
  const columns = found.columns.map(({ entries, count }) => {
    const column = entries.map(BigInt);
    const lifted = back === null ? column : multiply(back, transpose([column])).map((row) => row[0]!);
    return { column: withPositiveLead(lifted), count };
  });
  columns.sort((a, b) => descending(a.column, b.column));
  const flat = columns.flatMap(({ column, count }) => new Array<bigint[]>(count).fill(column));
  const size = back === null ? rank : back.length;
  return { rows: Array.from({ length: size }, (_, i) => flat.map((column) => column[i]!)), zeros: found.zeros };
}

function withPositiveLead(column: bigint[]): bigint[] {
  const lead = column.find((x) => x !== 0n);
  return lead !== undefined && lead < 0n ? column.map((x) => -x) : column;
}

function descending(a: readonly bigint[], b: readonly bigint[]): number {
  for (let i = 0; i < a.length; i += 1) {
    if (a[i] !== b[i]) return a[i]! > b[i]! ? -1 : 1;
  }
  return 0;
}

/**
 * Members of the orbit in Z^n: 2^(n−z) · n! / (z! · ∏ m_i!).
 * @param n at least the number of nonzero columns
 */
export function orbitSize(found: FoundOrbit, n: number): bigint {
  const nonzero = found.columns.reduce((sum, c) => sum + c.count, 0);
  let size = 2n ** BigInt(nonzero);
  for (let k = 0; k < nonzero; k += 1) size *= BigInt(n - k); // n! / z!
  for (const { count } of found.columns) size /= factorial(count);
  return size;
}

function factorial(m: number): bigint {
  let out = 1n;
  for (let k = 2; k <= m; k += 1) out *= BigInt(k);
  return out;
}
