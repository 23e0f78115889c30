/** Knuth's estimate of a tree's size by random probes (Math. Comp. 29 (1975)): unbiased, with a high variance that is told. */
import type { Address } from './address.ts';
import type { Ladder } from './ladder.ts';
import { LISTED } from './listing.ts';
import { openLadder, rankOf } from './open-ladder.ts';
import type { Plan } from './plan.ts';
import { randomBelow } from './random.ts';
import type { Stage } from './stages.ts';

export interface Estimate {
  readonly probes: number;
  /** Nodes of the tree: mean of the probes, and the range that holds about 8 times in 10. */
  readonly mean: number;
  readonly low: number;
  readonly high: number;
}

export interface ProbeOptions {
  readonly probes: number;
  readonly seed: number;
  /** Listing steps that all probes together may take; after that the probes so far have to do. */
  readonly steps?: number;
  readonly below?: Address;
}

const DEFAULT_STEPS = 2_000_000;
/** Half width of the range in standard errors: 80 % of a normal distribution. */
const EIGHT_IN_TEN = 1.2816;

/** @returns the estimate of the nodes at and under `options.below` */
export function estimate(plan: Plan, stage: Stage, options: ProbeOptions): Estimate {
  const rank = rankOf(plan);
  const below = randomBelow(options.seed);
  const sizes: number[] = [];
  let steps = options.steps ?? DEFAULT_STEPS;
  const start = options.below ?? [];
  for (let probe = 0; probe < options.probes && (steps > 0 || probe === 0); probe += 1) {
    const ladder = openLadder(plan, stage);
    walk(ladder, start);
    sizes.push(rank === 0 ? 1 : probeOnce(ladder, start.length, below, Math.max(steps, 1_000)));
    steps -= ladder.steps;
  }
  const mean = sizes.reduce((sum, x) => sum + x, 0) / sizes.length;
  const variance =
    sizes.length < 2 ? mean * mean : sizes.reduce((sum, x) => sum + (x - mean) * (x - mean), 0) / (sizes.length - 1);
  const half = EIGHT_IN_TEN * Math.sqrt(variance / sizes.length);
  return { probes: sizes.length, mean, low: Math.max(1, mean - half), high: mean + half };
}

/** Leads a fresh ladder to an inner node. */
export function walk(ladder: Ladder, address: Address): void {
  address.forEach((child, depth) => {
    ladder.begin(depth);
    for (let i = 0; i <= child; i += 1) ladder.next(depth, Number.MAX_SAFE_INTEGER);
    ladder.descend(depth);
  });
}

/** Walks down at random; a node with c children stands for c times what is below one of them. */
function probeOnce(ladder: Ladder, from: number, below: (n: number) => number, steps: number): number {
  let size = 1;
  let weight = 1;
  for (let depth = from; ; depth += 1) {
    const count = countChildren(ladder, depth, steps);
    if (count === 0) return size;
    weight *= count;
    size += weight;
    const chosen = below(count);
    ladder.begin(depth);
    for (let i = 0; i <= chosen; i += 1) ladder.next(depth, Number.MAX_SAFE_INTEGER);
    if (ladder.childIsLeaf(depth)) return size;
    ladder.descend(depth);
  }
}

function countChildren(ladder: Ladder, depth: number, steps: number): number {
  ladder.begin(depth);
  const last = ladder.steps + steps;
  let count = 0;
  while (ladder.steps < last && ladder.next(depth, last - ladder.steps) === LISTED.found) count += 1;
  return count;
}
