/**
 * The dual of a working Gram W in exact integers, for rule D and the trees of frames and columns. FORMAT.md, section 7.
 *
 * Rows are taken in an order with growing residuals. With W_k the first k of them, d_k = det W_k and w_k = d_k·W_k⁻¹·(inner products of row k
 * with them), the integers F_k = det(W_k − c·cᵀ) of a column c obey F_0 = 1, u = d_k·c_k − w_k·c, F_(k+1) = (d_(k+1)·F_k − u²) / d_k.
 */
import type { Matrix } from './arithmetic.ts';
import { rootOf } from './arithmetic.ts';
import { BIGINTS, DOUBLES, floorRoot, type Int, type Kind } from './int-kinds.ts';

export interface DualForm {
  readonly rank: number;
  readonly kind: Kind;
  readonly gram: Matrix;
  readonly determinant: Int;
  /** adj W = det W · W⁻¹, row after row. */
  readonly adjugate: readonly Int[];
  /** Rows in the order of the listing; d_0 … d_r; w_k. */
  readonly order: readonly number[];
  readonly minors: readonly Int[];
  readonly weights: readonly (readonly Int[])[];
  /** (a·b − c·d) / e, known to be an integer; in doubles for results and summands up to 2^46. */
  readonly quotient: (a: Int, b: Int, c: Int, d: Int, e: Int) => Int;
  /** The y ≥ 0 with y² = a, or −1. */
  readonly squareRoot: (a: Int) => Int;
}

const NEAREST = 6755399441055744; // 1.5·2^52
/** Below this every quotient is off by less than 1/8 before it is rounded; every sum of products is proved below 2^53 apart. */
const MINOR_BOUND = 2n ** 45n;
const SUM_BOUND = 2n ** 52n;

/** @param doublesBelow minors from here on go in bigint */
export function dualForm(gram: Matrix, doublesBelow = MINOR_BOUND): DualForm {
  const { order, minors, weights, adjugate } = border(gram);
  const rank = gram.length;
  const determinant = minors[rank]!;
  const root = (a: bigint) => rootOf(a) + 1n;
  const size = (a: bigint) => (a < 0n ? -a : a);
  const within = (row: readonly bigint[], at: readonly number[]) =>
    row.reduce((sum, x, i) => sum + size(x) * root(gram[at[i]!]![at[i]!]!), 0n) < SUM_BOUND;
  const plain = [...gram.keys()];
  const small =
    minors.every((d) => d < doublesBelow) &&
    weights.every((w) => within(w, order)) &&
    adjugate.every((row) => within(row, plain)) &&
    gram.every((row, i) => minors.every((d) => d * root(row[i]!) < SUM_BOUND)) &&
    adjugate.reduce((sum, row, i) => sum + root(determinant * row[i]!) * root(gram[i]![i]!), 0n) < SUM_BOUND;
  const kind = small ? DOUBLES : BIGINTS;
  const of = (row: readonly bigint[]) => row.map(kind.fromBig);
  return {
    rank,
    kind,
    gram,
    determinant: kind.fromBig(determinant),
    adjugate: of(adjugate.flat()),
    order,
    minors: of(minors),
    weights: weights.map(of),
    quotient: small
      ? (a, b, c, d, e) => (a * b - c * d) / e + NEAREST - NEAREST
      : (((a: bigint, b: bigint, c: bigint, d: bigint, e: bigint) =>
          (a * b - c * d) / e) as unknown as DualForm['quotient']),
    squareRoot: small ? smallRoot : (bigRoot as unknown as DualForm['squareRoot']),
  };
}

function smallRoot(a: number): number {
  if (a < 0) return -1;
  const y = floorRoot(a);
  return y * y === a ? y : -1;
}

const SIEVES = [64n, 45045n].map((m) => {
  const squares = new Set<bigint>();
  for (let x = 0n; x < m; x += 1n) squares.add((x * x) % m);
  return { m, squares };
});

function bigRoot(a: bigint): bigint {
  if (a < 0n || SIEVES.some(({ m, squares }) => !squares.has(a % m))) return -1n;
  const y = rootOf(a);
  return y * y === a ? y : -1n;
}

/** Rows one after the other, each time the one whose part outside the span of the earlier ones is shortest. */
function border(gram: Matrix) {
  const rank = gram.length;
  const left = new Set(gram.keys());
  const order: number[] = [];
  const minors = [1n];
  const weights: bigint[][] = [];
  /** d_k·W_k⁻¹ in the order of the rows. */
  let inverse: bigint[][] = [];
  while (left.size > 0) {
    const d = minors.at(-1)!;
    let best: { row: number; w: bigint[]; next: bigint } | null = null;
    for (const row of left) {
      const b = order.map((v) => gram[row]![v]!);
      const w = inverse.map((line) => line.reduce((sum, x, j) => sum + x * b[j]!, 0n));
      const next = w.reduce((sum, x, i) => sum - x * b[i]!, d * gram[row]![row]!);
      if (best === null || next < best.next) best = { row, w, next };
    }
    const { row, w, next } = best!;
    inverse = [
      ...inverse.map((line, i) => [...line.map((x, j) => (next * x + w[i]! * w[j]!) / d), -w[i]!]),
      [...w.map((x) => -x), d],
    ];
    order.push(row);
    minors.push(next);
    weights.push(w);
    left.delete(row);
  }
  const adjugate = Array.from({ length: rank }, () => new Array<bigint>(rank).fill(0n));
  order.forEach((v, i) => order.forEach((w, j) => (adjugate[v]![w] = inverse[i]![j]!)));
  return { order, minors, weights, adjugate };
}
