/**
 * One run over an interval of a tree: enters nodes in preorder, counts them, keeps what it finds. Can stop after any
 * slice of work, tell where it stands, go on from there, and give the rest of its interval away.
 */
import { compareAddresses, type Address, type Interval } from './address.ts';
import type { FoundOrbit } from './found.ts';
import type { Ladder } from './ladder.ts';
import { LISTED } from './listing.ts';
import { openLadder, rankOf } from './open-ladder.ts';
import type { Plan } from './plan.ts';
import type { Stage } from './stages.ts';

export type Advance = 'more' | 'done' | 'found';

/** Steps of listing that stand for one node when work is measured. */
const STEPS_PER_NODE = 16;
/** Children that are counted to tell what share of a node is done; more count as this many. */
const COUNTED_CHILDREN = 20_000;
/** Depths that the share looks at: deeper ones weigh next to nothing. */
const SHARE_DEPTH = 10;

/** A checkpoint: the listing at each depth of the path, and the number of its next child. Null levels: not begun. */
interface SavedRun {
  readonly path: readonly number[];
  readonly levels: readonly { readonly next: number; readonly listing: unknown }[] | null;
  readonly nodes: string;
  readonly orbits: string;
}

export class Run {
  /** Numbers: a run of 2^53 nodes does not end. */
  private entered = 0;
  private leaves = 0;
  private readonly rank: number;
  private readonly ladder: Ladder;
  /** Child index at each depth; its length is the depth of the node where the run stands. */
  private readonly path: number[] = [];
  /** Next child index to be listed at each depth. */
  private readonly index: number[] = [];
  private to: Address | null;
  private begun = false;
  private finished = false;
  /** The path leads to a leaf: nothing is listed below it. */
  private atLeaf = false;
  private found: FoundOrbit[] = [];
  private readonly childCounts = new Map<string, number>();

  constructor(
    private readonly plan: Plan,
    private readonly stage: Stage,
    private readonly interval: Interval,
    checkpoint?: string,
  ) {
    this.rank = rankOf(plan);
    this.ladder = openLadder(plan, stage);
    this.to = interval.to;
    if (checkpoint === undefined) return;
    const saved = JSON.parse(checkpoint) as SavedRun;
    this.entered = Number(saved.nodes);
    this.leaves = Number(saved.orbits);
    if (saved.levels === null) return;
    this.begun = true;
    this.path.push(...saved.path);
    this.atLeaf = saved.levels.length === saved.path.length;
    saved.levels.forEach(({ next, listing }, depth) => {
      if (depth > 0) this.ladder.descend(depth - 1);
      this.openChildren(depth);
      this.ladder.restore(depth, listing);
      this.index[depth] = next;
    });
  }

  get nodes(): bigint {
    return BigInt(this.entered);
  }

  get orbits(): bigint {
    return BigInt(this.leaves);
  }

  /** Works for about `nodes` nodes. `found` only where one embedding is wanted. */
  advance(nodes: number): Advance {
    if (this.finished) return 'done';
    if (!this.begun) {
      this.begun = true;
      if (this.to !== null && compareAddresses(this.interval.from, this.to) >= 0) return this.end();
      this.walkTo(this.interval.from);
      this.enter();
      if (this.foundOne()) return 'found';
    }
    const { ladder } = this;
    // descending and opening a node costs steps too, and a node at least one
    for (let left = nodes * STEPS_PER_NODE, before = ladder.steps; left > 0;) {
      left -= ladder.steps - before;
      before = ladder.steps;
      if (left <= 0) break;
      const depth = this.path.length;
      if (this.atLeaf) {
        if (!this.up()) return this.end();
        continue;
      }
      const listed = ladder.next(depth, left);
      left -= 1;
      if (listed === LISTED.paused) return 'more';
      if (listed === LISTED.done) {
        if (!this.up()) return this.end();
        continue;
      }
      this.path.push(this.index[depth]!);
      this.index[depth]! += 1;
      if (this.to !== null && compareAddresses(this.path, this.to) >= 0) {
        this.path.pop();
        return this.end();
      }
      this.enter();
      if (this.foundOne()) return 'found';
    }
    return 'more';
  }

  private end(): Advance {
    this.finished = true;
    return 'done';
  }

  private foundOne(): boolean {
    if (this.stage.purpose !== 'one' || this.leaves === 0) return false;
    this.finished = true;
    return true;
  }

  /** Counts the node that the path leads to and opens the listing of its children. */
  private enter(): void {
    this.entered += 1;
    const depth = this.path.length;
    this.atLeaf = depth === 0 ? this.rank === 0 : this.ladder.childIsLeaf(depth - 1);
    if (this.atLeaf) {
      this.leaves += 1;
      this.found.push(depth === 0 ? { columns: [], zeros: this.stage.dimension } : this.ladder.orbit(depth - 1));
      return;
    }
    if (depth > 0) this.ladder.descend(depth - 1);
    this.openChildren(depth);
  }

  private openChildren(depth: number): void {
    this.ladder.begin(depth);
    this.index[depth] = 0;
  }

  private up(): boolean {
    if (this.path.length === 0) return false;
    this.path.pop();
    this.atLeaf = false;
    return true;
  }

  /** Leads the ladder to a node that exists, without counting anything. */
  private walkTo(address: Address): void {
    if (this.rank > 0) this.openChildren(0);
    address.forEach((child, depth) => {
      while (this.index[depth]! <= child) {
        if (this.ladder.next(depth, Number.MAX_SAFE_INTEGER) !== LISTED.found)
          throw new RangeError(`no node at address ${JSON.stringify(address)}`);
        this.index[depth]! += 1;
      }
      this.path.push(child);
      if (depth + 1 < address.length) {
        this.ladder.descend(depth);
        this.openChildren(depth + 1);
      }
    });
  }

  /** What was found since the last call, in tree order. */
  takeFound(): FoundOrbit[] {
    const out = this.found;
    this.found = [];
    return out;
  }

  /** Where the run stands, down to the step of each listing. Found orbits must have been taken before. */
  checkpoint(): string {
    const depths = this.atLeaf ? this.path.length : this.path.length + 1;
    const saved: SavedRun = {
      path: this.path,
      levels: this.begun
        ? Array.from({ length: depths }, (_, depth) => ({
            next: this.index[depth]!,
            listing: this.ladder.state(depth),
          }))
        : null,
      nodes: String(this.entered),
      orbits: String(this.leaves),
    };
    return JSON.stringify(saved);
  }

  /** Ends the interval earlier. The new end must lie after everything that was entered. */
  shorten(to: Address): void {
    this.to = to;
  }

  /** Half of the untouched siblings at the shallowest depth that has any, or null. */
  giveAway(): { readonly mid: Address; readonly shareKept: number } | null {
    if (!this.begun || this.finished) return null;
    for (let depth = 0; depth < this.path.length; depth += 1) {
      const end = this.endOfChildren(depth);
      const untouched = end - this.path[depth]! - 1;
      if (untouched < 1) continue;
      const mid = [...this.path.slice(0, depth), this.path[depth]! + 1 + Math.floor(untouched / 2)];
      const [from, cut, to] = [
        this.position(this.interval.from),
        this.position(mid),
        this.to === null ? 1 : this.position(this.to),
      ];
      return { mid, shareKept: to > from ? Math.min(1, Math.max(0, (cut - from) / (to - from))) : 1 };
    }
    return null;
  }

  /** Number of children of the path's node at `depth` that belong to the interval. */
  private endOfChildren(depth: number): number {
    const count = this.countChildren(this.path.slice(0, depth));
    const { to } = this;
    if (to === null || to.length <= depth || to.slice(0, depth).some((x, i) => x !== this.path[i])) return count;
    return Math.min(count, to.length > depth + 1 ? to[depth]! + 1 : to[depth]!);
  }

  /** Part of the interval that is done, 0 to 1, as if all children of a node weighed the same. */
  get shareDone(): number {
    if (this.finished) return 1;
    if (!this.begun) return 0;
    const next = this.atLeaf ? this.path : [...this.path, this.index[this.path.length]!];
    const [from, at, to] = [
      this.position(this.interval.from),
      this.position(next),
      this.to === null ? 1 : this.position(this.to),
    ];
    return to > from ? Math.min(1, Math.max(0, (at - from) / (to - from))) : 0;
  }

  private position(address: Address): number {
    let [position, width] = [0, 1];
    for (let depth = 0; depth < Math.min(address.length, SHARE_DEPTH); depth += 1) {
      width /= Math.max(1, this.countChildren(address.slice(0, depth)));
      position += address[depth]! * width;
    }
    return Math.min(1, position);
  }

  private countChildren(node: Address): number {
    const key = node.join(' ');
    const known = this.childCounts.get(key);
    if (known !== undefined) return known;
    const ladder = openLadder(this.plan, this.stage);
    node.forEach((child, depth) => {
      ladder.begin(depth);
      for (let i = 0; i <= child; i += 1) ladder.next(depth, Number.MAX_SAFE_INTEGER);
      ladder.descend(depth);
    });
    ladder.begin(node.length);
    let count = 0;
    while (count < COUNTED_CHILDREN && ladder.next(node.length, COUNTED_CHILDREN * STEPS_PER_NODE) === LISTED.found)
      count += 1;
    if (this.childCounts.size > 1_000) this.childCounts.clear();
    this.childCounts.set(key, count);
    return count;
  }

  /** Steps of listing so far. */
  get steps(): number {
    return this.ladder.steps;
  }

  /** Memory that the run counts for itself, in bytes. */
  get bytes(): number {
    return this.ladder.bytes + this.found.length * (64 + 24 * this.rank) + this.childCounts.size * 64;
  }
}

/** @param checkpoint from `Run.checkpoint` of a run over the same interval (its end may have been shortened) */
export function openRun(plan: Plan, stage: Stage, interval: Interval, checkpoint?: string): Run {
  return new Run(plan, stage, interval, checkpoint);
}
