/**
 * A first cover of a tree: intervals that abut from the root to the end. Shares are told as if all children of a node
 * weighed the same; what turns out long is cut again while it runs.
 */
import { compareAddresses, type Address, type Interval } from './address.ts';
import { openLadder } from './ladder.ts';
import { LISTED } from './listing.ts';
import type { Plan } from './plan.ts';
import type { Stage } from './stages.ts';
import { workingForm, type WorkingForm } from './working-form.ts';

export interface CoverPiece extends Interval {
  /** Estimated share of the tree. */
  readonly share: number;
}

interface Branch {
  readonly address: Address;
  readonly share: number;
}

/** Children that are counted; a node with more is cut among the first of them, the rest go with the last piece. */
const COUNTED_CHILDREN = 20_000;
/** Listing steps that one node's children may cost. */
const COUNT_STEPS = 400_000;
/** Listing steps of the whole cover. */
const COVER_STEPS = 4_000_000;

/** @param parcels how many pieces are wanted, roughly */
export function cover(plan: Plan, stage: Stage, parcels: number): CoverPiece[] {
  const form = workingForm(plan);
  let branches: Branch[] = [{ address: [], share: 1 }];
  const closed = new Set<Branch>();
  for (let steps = 0; branches.length < parcels && steps < COVER_STEPS;) {
    const open = branches.filter((b) => b.address.length < form.rank && !closed.has(b));
    if (open.length === 0) break;
    const largest = open.reduce((a, b) => (b.share > a.share ? b : a));
    const children = childBranches(form, stage.dimension, largest, parcels);
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
function childBranches(
  form: WorkingForm,
  dimension: number,
  parent: Branch,
  most: number,
): { branches: Branch[]; steps: number } {
  const ladder = openLadder(form, dimension);
  parent.address.forEach((child, depth) => {
    ladder.begin(depth);
    for (let i = 0; i <= child; i += 1) ladder.next(depth, Number.MAX_SAFE_INTEGER);
    ladder.descend(depth);
  });
  const depth = parent.address.length;
  ladder.begin(depth);
  const last = ladder.steps + COUNT_STEPS;
  let count = 0;
  while (count < COUNTED_CHILDREN && ladder.steps < last && ladder.next(depth, last - ladder.steps) === LISTED.found)
    count += 1;
  const stride = Math.max(1, Math.ceil(count / most));
  const branches = Array.from({ length: Math.ceil(count / stride) }, (_, i) => ({
    address: [...parent.address, i * stride],
    share: (parent.share * Math.min(stride, count - i * stride)) / count,
  }));
  return { branches, steps: ladder.steps };
}
