/** A first cover of a tree: intervals that abut from the root to the end, of roughly equal estimated size. */
import { compareAddresses, type Address, type Interval } from './address.ts';
import { probeForm } from './estimate.ts';
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
  readonly size: number;
}

const PROBES = 4;
const PROBE_STEPS = 20_000;
/** A node with more children than this is cut into runs of siblings, not into single ones. */
const MOST_CHILDREN = 256;

/** @param parcels how many pieces are wanted, roughly */
export function cover(plan: Plan, stage: Stage, parcels: number): CoverPiece[] {
  const form = workingForm(plan);
  let branches: Branch[] = [{ address: [], size: 1 }];
  const whole = new Set<string>();
  while (branches.length < parcels) {
    const open = branches.filter((b) => b.address.length < form.rank && !whole.has(b.address.join()));
    if (open.length === 0) break;
    const largest = open.reduce((a, b) => (b.size > a.size ? b : a));
    const children = childBranches(form, stage.dimension, largest.address);
    if (children.length === 0) whole.add(largest.address.join());
    branches = branches.flatMap((b) => (b === largest && children.length > 0 ? children : [b]));
  }
  branches.sort((a, b) => compareAddresses(a.address, b.address));
  const total = branches.reduce((sum, b) => sum + b.size, 0);
  return branches.map((b, i) => ({
    from: i === 0 ? [] : b.address,
    to: branches[i + 1]?.address ?? null,
    share: b.size / total,
  }));
}

function childBranches(form: WorkingForm, dimension: number, address: Address): Branch[] {
  const ladder = openLadder(form, dimension);
  address.forEach((child, depth) => {
    ladder.begin(depth);
    for (let i = 0; i <= child; i += 1) ladder.next(depth, Number.MAX_SAFE_INTEGER);
    ladder.descend(depth);
  });
  ladder.begin(address.length);
  let count = 0;
  while (count < 65_536 && ladder.next(address.length, Number.MAX_SAFE_INTEGER) === LISTED.found) count += 1;
  const stride = Math.max(1, Math.ceil(count / MOST_CHILDREN));
  const firsts = Array.from({ length: Math.ceil(count / stride) }, (_, i) => i * stride);
  return firsts.map((first, i) => {
    const below = [...address, first];
    const estimated = probeForm(form, dimension, { probes: PROBES, seed: 1 + i, steps: PROBE_STEPS, below });
    return { address: below, size: estimated.mean * stride };
  });
}
