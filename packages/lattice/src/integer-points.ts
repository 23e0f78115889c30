/**
 * Integer points of an ellipsoid, entry by entry (Fincke–Pohst, Math. Comp. 44 (1985)), in integers throughout.
 *
 * The form is given by its successive projections: scales s_0, …, s_r > 0 and integer vectors p_k of length k. With
 * u_k = s_k·x_k − p_k·(x_0 … x_(k−1)) the norm of x is Σ u_k²/(s_k·s_(k+1)), and F_k = s_k·(bound − the terms before k)
 * is an integer that obeys F_(k+1) = (s_(k+1)·F_k − u_k²)/s_k.
 */
import { floorDivide, integerSqrt } from '@palmette/exact';

export interface Projections {
  readonly scales: readonly bigint[];
  readonly projections: readonly (readonly bigint[])[];
}

export interface PointListing {
  /** Largest norm. */
  readonly bound: bigint;
  /** Entries tried, over all places, before the listing gives up. */
  readonly maxSteps: number;
  /** Only points whose norm is the bound. */
  readonly onlyBound?: boolean;
  /** Only points whose first entry is 1; otherwise points ≠ 0 up to sign, their first nonzero entry positive. */
  readonly leadOne?: boolean;
}

export interface PointsListed {
  readonly end: 'listed' | 'stopped' | 'too many';
  readonly steps: number;
}

/**
 * Calls `visit` with each point and s_r·(bound − its norm); the array is reused between calls. `visit` ends the
 * listing by returning true.
 */
export function listIntegerPoints(
  { scales, projections }: Projections,
  { bound, maxSteps, onlyBound = false, leadOne = false }: PointListing,
  visit: (point: readonly bigint[], left: bigint) => boolean,
): PointsListed {
  const rank = projections.length;
  let steps = 0;
  if (rank === 0) return { end: 'listed', steps };
  const point = new Array<bigint>(rank).fill(0n);
  /** Values still to be tried at each place, from next to last. */
  const next = new Array<bigint>(rank).fill(0n);
  const last = new Array<bigint>(rank).fill(0n);
  const shift = new Array<bigint>(rank).fill(0n);
  const residual = new Array<bigint>(rank).fill(scales[0]! * bound);
  /** Number of nonzero entries before each place: while it is 0 only values ≥ 0 are tried. */
  const nonzero = new Array<number>(rank + 1).fill(0);

  const enter = (k: number) => {
    let s = 0n;
    const p = projections[k]!;
    for (let i = 0; i < k; i += 1) {
      if (point[i] !== 0n && p[i] !== 0n) s += p[i]! * point[i]!;
    }
    shift[k] = s;
    const reach = integerSqrt(scales[k + 1]! * residual[k]!);
    next[k] = nonzero[k] === 0 ? 0n : -floorDivide(reach - s, scales[k]!);
    last[k] = floorDivide(reach + s, scales[k]!);
    if (k === 0 && leadOne) {
      next[0] = 1n;
      if (last[0]! > 1n) last[0] = 1n;
    }
  };

  let k = 0;
  enter(0);
  while (k >= 0) {
    const value = next[k]!;
    if (value > last[k]!) {
      k -= 1;
      continue;
    }
    steps += 1;
    if (steps > maxSteps) return { end: 'too many', steps };
    // nothing is left over only at the ends of the range
    next[k] = onlyBound && k + 1 === rank && value < last[k]! ? last[k]! : value + 1n;
    point[k] = value;
    const u = scales[k]! * value - shift[k]!;
    const left = (scales[k + 1]! * residual[k]! - u * u) / scales[k]!;
    nonzero[k + 1] = nonzero[k]! + (value === 0n ? 0 : 1);
    if (k + 1 < rank) {
      k += 1;
      residual[k] = left;
      enter(k);
    } else if (nonzero[rank]! > 0 && (!onlyBound || left === 0n) && visit(point, left))
      return { end: 'stopped', steps };
  }
  return { end: 'listed', steps };
}
