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
};

export const BIGINTS = {
  zero: 0n,
  one: 1n,
  of: BigInt,
  fromBig: (x: bigint) => x,
  root: rootOf,
  half: (a: bigint) => a / 2n,
} as unknown as Kind;
