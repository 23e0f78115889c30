/**
 * Doubles and bigint by one name. Code that takes a `Kind` uses only the operators that both share and only constants
 * that come from it, so one text serves small integers fast and large ones exactly.
 */
import { rootOf } from './arithmetic.ts';

/** A double with an integer value, or a bigint: one kind throughout a run. */
export type Int = number;

export interface Kind {
  readonly zero: Int;
  readonly one: Int;
  readonly of: (x: number) => Int;
  readonly fromBig: (x: bigint) => Int;
  /** Largest s with s² ≤ a; a is below 2^53 where the kind is doubles. */
  readonly root: (a: Int) => Int;
  readonly half: (a: Int) => Int;
  /** Some s with s² > a, at most 2 above the root and a 2^-40 part of it. */
  readonly rootAbove: (a: Int) => Int;
  /** a/d rounded down; d > 0. In doubles d·quotient has to be below 2^53. */
  readonly floorQuotient: (a: Int, d: Int) => Int;
}

/** Largest s with s² ≤ a, for 0 ≤ a < 2^53. A root that is an integer is never rounded below itself. */
export function floorRoot(a: number): number {
  let root = Math.floor(Math.sqrt(a));
  while (root * root > a) root -= 1;
  return root;
}

export const DOUBLES: Kind = {
  zero: 0,
  one: 1,
  of: (x) => x,
  fromBig: Number,
  root: floorRoot,
  half: (a) => Math.floor(a / 2),
  rootAbove: (a) => Math.floor(Math.sqrt(a) * (1 + 2 ** -42)) + 2,
  floorQuotient: (a, d) => {
    const q = Math.floor(a / d);
    return q * d > a ? q - 1 : (q + 1) * d <= a ? q + 1 : q;
  },
};

export const BIGINTS = {
  zero: 0n,
  one: 1n,
  of: BigInt,
  fromBig: (x: bigint) => x,
  root: rootOf,
  half: (a: bigint) => a / 2n,
  rootAbove: (a: bigint) => rootOf(a) + 1n,
  floorQuotient: (a: bigint, d: bigint) => (a >= 0n ? a / d : -((d - 1n - a) / d)),
} as unknown as Kind;
