/**
 * A first cover of a tree: intervals that abut from the root to the end. Shares are told as if all children of a node
 * weighed the same; what turns out long is cut again while it runs.
 */
import { compareAddresses, type Address, type Interval } from './address.ts';
import { walk } from './estimate.ts';
import { LISTED } from './listing.ts';
import { openLadder, rankOf } from './open-ladder.ts';
import type { Plan } from './plan.ts';
import type { Stage } from './stages.ts';

export interface CoverPiece extends Interval {
  /** Estimated share of the tree. */
  readonly share: number;
}

interface Branch {
  readonly address: Address;
  readonly share: number;
  readonly leaf: boolean;
}

/** Children that are counted; a node with more is cut among the first of them, the rest go with the last piece. */
const COUNTED_CHILDREN = 20_000;
/** Listing steps that one node's children may cost. */
const COUNT_STEPS = 400_000;
/** Listing steps of the whole cover. */
const COVER_STEPS = 4_000_000;

/** @param parcels how many pieces are wanted, roughly */
export function cover(plan: Plan, stage: Stage, parcels: number): CoverPiece[] {
  let branches: Branch[] = [{ address: [], share: 1, leaf: rankOf(plan) === 0 }];
  const closed = new Set<Branch>();
  for (let steps = 0; branches.length < parcels && steps < COVER_STEPS;) {
    const open = branches.filter((b) => !b.leaf && !closed.has(b));
    if (open.length === 0) break;
    const largest = open.reduce((a, b) => (b.share > a.share ? b : a));
    const children = childBranches(plan, stage, largest, parcels);
    steps += children.steps;
    if (children.branches.length === 0) closed.add(largest);
    else branches = branches.flatMap((b) => (b === largest ? children.branches : [b]));
  }
  branches.sort((a, b) => compareAddresses(a.address, b.address));
  return branches.map((b, i) => ({
    from: i === 0 ? [] : b.address,
    to: branches[i + 1]?.address ?? null,
    share: b.share,
  }));
}

/** At most `most` runs of siblings. */
function childBranches(plan: Plan, stage: Stage, parent: Branch, most: number): { branches: Branch[]; steps: number } {
  const ladder = openLadder(plan, stage);
  walk(ladder, parent.address);
  const depth = parent.address.length;
  ladder.begin(depth);
  const last = ladder.steps + COUNT_STEPS;
  let count = 0;
  let leaves = false;
  while (count < COUNTED_CHILDREN && ladder.steps < last && ladder.next(depth, last - ladder.steps) === LISTED.found) {
    count += 1;
    leaves ||= ladder.childIsLeaf(depth);
  }
  const stride = Math.max(1, Math.ceil(count / most));
  const branches = Array.from({ length: Math.ceil(count / stride) }, (_, i) => ({
    address: [...parent.address, i * stride],
    share: (parent.share * Math.min(stride, count - i * stride)) / count,
    leaf: leaves,
  }));
  return { branches, steps: ladder.steps };
}
