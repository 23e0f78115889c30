/**
 * Rows whose next row is chosen at each node: the one with the fewest children, ties to the first in the plan's order (FORMAT.md, the tree of
 * rows, revision 2). A row without children ends the branch. The choice depends on the node alone.
 *
 * Children are counted by the plain listing, row after row, each only up to the best count so far. Counting is part of `next`, so that it pauses like any listing and
 * where it stands is part of its state.
 */
import type { FoundOrbit } from './found.ts';
import type { Ladder } from './ladder.ts';
import { Columns } from './columns.ts';
import { Listing, LISTED, type Listed, type ListingState } from './listing.ts';
import type { WorkingForm } from './working-form.ts';

interface Level {
  readonly listing: Listing;
  readonly target: Float64Array;
  /** Depth of the form's order at which the row stands, once it is chosen; −1 while it is not. */
  row: number;
  /** Rows by their depth in the order: the one that is counted, its count, the best so far. */
  counted: number;
  count: number;
  best: number;
  bestCount: number;
}

/** Where a level stands, in the middle of choosing too. The bound is −1 while nothing was counted to its end. */
interface SavedLevel {
  readonly row: number;
  readonly counted: number;
  readonly count: number;
  readonly best: number;
  readonly bestCount: number;
  readonly listing: ListingState | null;
}

export class FewestLadder implements Ladder {
  steps = 0;
  private readonly levels: Level[] = [];
  private readonly leaf = new Columns();
  /** Row (by its depth in the order) of each depth of the path, and their norms. */
  private readonly rowAt: Int32Array;
  private readonly norms: Float64Array;
  private readonly rank: number;

  /** @param form small: doubles are exact */
  constructor(
    private readonly form: WorkingForm,
    dimension: number,
  ) {
    this.rank = form.rank;
    this.rowAt = new Int32Array(this.rank);
    this.norms = new Float64Array(this.rank);
    this.level(0).listing.columns.reset(dimension);
  }

  private level(depth: number): Level {
    return (this.levels[depth] ??= {
      listing: new Listing(),
      target: new Float64Array(this.rank),
      row: -1,
      counted: -1,
      count: 0,
      best: -1,
      bestCount: Infinity,
    });
  }

  begin(depth: number): void {
    Object.assign(this.level(depth), { row: -1, counted: -1, count: 0, best: -1, bestCount: Infinity });
  }

  next(depth: number, limit: number): Listed {
    const level = this.levels[depth]!;
    const last = this.steps + limit;
    while (level.row < 0) {
      if (this.steps >= last) return LISTED.paused;
      this.steps += 1;
      if (!this.chooseOn(depth, level, last)) return LISTED.paused;
    }
    return this.listOn(level, last);
  }

  private listOn(level: Level, last: number): Listed {
    const before = level.listing.steps;
    const listed = level.listing.next(Math.max(1, last - this.steps));
    this.steps += level.listing.steps - before;
    return listed;
  }

  /** Counts on; false where the steps are used up. */
  private chooseOn(depth: number, level: Level, last: number): boolean {
    if (level.counted < 0) {
      this.open(depth, level, this.nextRow(depth, 0));
      return true;
    }
    const listed = this.listOn(level, last);
    if (listed === LISTED.paused) return false;
    if (listed === LISTED.found) level.count += 1;
    if (listed === LISTED.found && level.count < level.bestCount) return true;
    if (level.count < level.bestCount) {
      level.best = level.counted;
      level.bestCount = level.count;
    }
    const next = level.bestCount === 0 ? -1 : this.nextRow(depth, level.counted + 1);
    if (next < 0) return this.settle(depth, level);
    this.open(depth, level, next);
    return true;
  }

  /** The next row, by its depth in the order, that is not on the path; −1 if there is none. */
  private nextRow(depth: number, from: number): number {
    for (let row = from; row < this.rank; row += 1) {
      let placed = false;
      for (let k = 0; k < depth && !placed; k += 1) placed = this.rowAt[k] === row;
      if (!placed) return row;
    }
    return -1;
  }

  private open(depth: number, level: Level, row: number): void {
    level.counted = row;
    level.count = 0;
    this.beginRow(depth, level, row);
  }

  private beginRow(depth: number, level: Level, row: number): void {
    for (let k = 0; k < depth; k += 1) {
      const other = this.rowAt[k]!;
      level.target[k] = row > other ? this.form.targets[row]![other]! : this.form.targets[other]![row]!;
    }
    level.listing.begin(depth, this.form.norms[row]!, level.target, this.norms);
  }

  private settle(depth: number, level: Level): true {
    level.row = level.best;
    this.rowAt[depth] = level.row;
    this.norms[depth] = this.form.norms[level.row]!;
    this.beginRow(depth, level, level.row);
    return true;
  }

  state(depth: number): SavedLevel {
    const { row, counted, count, best, bestCount, listing } = this.levels[depth]!;
    return {
      row,
      counted,
      count,
      best,
      bestCount: best < 0 ? -1 : bestCount,
      listing: row < 0 && counted < 0 ? null : listing.state(),
    };
  }

  restore(depth: number, state: unknown): void {
    const { row, counted, count, best, bestCount, listing } = state as SavedLevel;
    const level = this.levels[depth]!;
    Object.assign(level, { row, counted, count, best, bestCount: best < 0 ? Infinity : bestCount });
    if (listing === null) return;
    if (row >= 0) this.settle(depth, level);
    else this.beginRow(depth, level, counted);
    level.listing.restore(listing);
  }

  childIsLeaf(depth: number): boolean {
    return depth + 1 === this.rank;
  }

  descend(depth: number): void {
    this.levels[depth]!.listing.writeChild(this.level(depth + 1).listing.columns);
  }

  orbit(): FoundOrbit {
    this.levels[this.rank - 1]!.listing.writeChild(this.leaf);
    const { leaf, form } = this;
    const columns = Array.from({ length: leaf.count }, (_, c) => {
      const entries = new Array<number>(this.rank).fill(0);
      for (let e = leaf.start[c]!; e < leaf.start[c + 1]!; e += 1)
        entries[form.order[this.rowAt[leaf.rows[e]!]!]!] = leaf.vals[e]!;
      return { entries, count: leaf.mult[c]! };
    });
    return { columns, zeros: leaf.zeros };
  }

  get bytes(): number {
    return this.levels.reduce((sum, level) => sum + level.listing.bytes + 8 * this.rank, this.leaf.bytes);
  }
}
