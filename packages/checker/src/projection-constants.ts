/**
 * What the listing by projection needs to know about a tree at each depth, computed once in bigint.
 *
 * G is the Gram matrix of the first k rows, D_k its determinant, b the inner products of row k with them. Rows and new row
 * are on all columns, so G, b and D_k are the same at every node of depth k: the new row is x = Hᵀ G⁻¹ b + y with y
 * orthogonal to the rows, and |y|² = D_{k+1} / D_k.
 */
import type { Matrix } from './arithmetic.ts';

export interface DepthConstants {
  /** W_kk. */
  readonly norm: number;
  /** D_k and D_{k+1}. */
  readonly volume: number;
  readonly nextVolume: number;
  /** D_k · G⁻¹ · b: one integer for each row before. */
  readonly weights: Float64Array;
}

/** Results of steps have to stay below this in size; four times room to 2^53. */
const BOUND = 2n ** 51n;

/**
 * Constants for the depths 0, 1, … as far as everything that a listing computes there is below 2^53: at a node of depth k
 * no result of a step is larger than D_k · (√W_kk + 1), D_{k+1}, or Σ |weight_i| · √W_ii (see `ProjectionListing`).
 */
export function projectionConstants(gram: Matrix, depths: number): DepthConstants[] {
  const out: DepthConstants[] = [];
  /** D_k · G⁻¹, k × k. */
  let adjugate: bigint[][] = [];
  let volume = 1n;
  for (let k = 0; k < Math.min(depths, gram.length); k += 1) {
    const norm = gram[k]![k]!;
    const b = gram[k]!.slice(0, k);
    const weights = adjugate.map((row) => row.reduce((sum, x, j) => sum + x * b[j]!, 0n));
    const nextVolume = weights.reduce((sum, w, i) => sum - w * b[i]!, volume * norm);
    if (norm >= BOUND) break;
    const root = (a: bigint) => BigInt(Math.ceil(Math.sqrt(Number(a)))) + 1n;
    const size = (a: bigint) => (a < 0n ? -a : a);
    const centre = weights.reduce((sum, w, i) => sum + size(w) * root(gram[i]![i]!), 0n);
    if (volume * (root(norm) + 1n) >= BOUND || nextVolume >= BOUND || centre >= BOUND) break;
    out.push({
      norm: Number(norm),
      volume: Number(volume),
      nextVolume: Number(nextVolume),
      weights: Float64Array.from(weights, Number),
    });
    adjugate = [
      ...adjugate.map((row, i) => [
        ...row.map((x, j) => (nextVolume * x + weights[i]! * weights[j]!) / volume),
        -weights[i]!,
      ]),
      [...weights.map((w) => -w), volume],
    ];
    volume = nextVolume;
  }
  return out;
}
