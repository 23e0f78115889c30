/**
 * What the trees of frames and of columns share: at each node candidates (columns up to sign), what of W is still to be
 * covered, and a row of W on which the node branches. A row with W_ii still above 0 needs another column with an entry there, so
 * the children are the candidates with one: the row with the fewest is taken, the first of them. Below a child, the candidates
 * of that row before the chosen one are out, so that each multiset is met once: by its first member in that order.
 */
import type { FoundOrbit } from './found.ts';
import { LISTED, type Listed } from './listing.ts';

/** A node on the path. `candidates` are places in a list of `entries`. */
export interface VectorLevel {
  entries: Int32Array;
  candidates: Int32Array;
  count: number;
  /** Diagonal of W that is still to be covered. */
  readonly rest: Float64Array;
  /** Places in `candidates` of the children. */
  branch: Int32Array;
  children: number;
  /** Row on which the node branches. */
  row: number;
  /** The child that was listed last. */
  at: number;
}

export abstract class VectorLadder<L extends VectorLevel> {
  steps = 0;
  protected readonly levels: L[] = [];
  private readonly meets: Int32Array;
  private readonly squares: Float64Array;

  constructor(
    protected readonly rank: number,
    protected readonly dimension: number,
  ) {
    this.meets = new Int32Array(rank);
    this.squares = new Float64Array(rank);
  }

  protected abstract newLevel(): L;
  /** Writes the child that `chosen` is as the node at depth + 1. */
  protected abstract writeChild(from: L, to: L, chosen: number): void;
  /** Places in `candidates` at which a node has children, in order; called once per node. */
  protected abstract branchOn(level: L): void;
  /** Is this child complete? If so it is a leaf, unless `repeated` says that its orbit is met elsewhere. */
  protected abstract completes(level: L, chosen: number): boolean;
  protected abstract repeated(depth: number): boolean;

  protected level(depth: number): L {
    return (this.levels[depth] ??= this.newLevel());
  }

  begin(depth: number): void {
    const level = this.levels[depth]!;
    level.at = -1;
    level.children = 0;
    this.branchOn(level);
    this.steps += 1 + Math.floor(level.count / 4);
  }

  next(depth: number, limit: number): Listed {
    const level = this.levels[depth]!;
    const last = this.steps + limit;
    for (;;) {
      if (this.steps >= last) return LISTED.paused;
      this.steps += 1;
      if (level.at + 1 >= level.children) return LISTED.done;
      level.at += 1;
      if (!this.childIsLeaf(depth) || !this.repeated(depth)) return LISTED.found;
    }
  }

  state(depth: number): number {
    return this.levels[depth]!.at;
  }

  restore(depth: number, state: unknown): void {
    this.levels[depth]!.at = state as number;
  }

  childIsLeaf(depth: number): boolean {
    const level = this.levels[depth]!;
    return this.completes(level, this.chosen(level));
  }

  descend(depth: number): void {
    const from = this.levels[depth]!;
    const to = this.level(depth + 1);
    this.steps += 1 + Math.floor(from.count / 2);
    if (to.candidates.length < from.count) to.candidates = new Int32Array(from.count);
    const chosen = this.chosen(from);
    to.entries = from.entries;
    for (let i = 0; i < this.rank; i += 1) {
      const x = from.entries[chosen * this.rank + i]!;
      to.rest[i] = from.rest[i]! - x * x;
    }
    this.writeChild(from, to, chosen);
  }

  /** The candidate that was listed last. */
  protected chosen(level: L): number {
    return level.candidates[level.branch[level.at]!]!;
  }

  /**
   * Chooses the row and fills `branch` with the places of its candidates. Leaves no children if a row cannot be covered.
   * @param once each candidate is used at most once: then their squares must be enough
   */
  protected branchOnFewest(level: L, once: boolean): void {
    const { rank, meets, squares } = this;
    const { entries, candidates, count, rest } = level;
    meets.fill(0);
    squares.fill(0);
    for (let p = 0; p < count; p += 1) {
      const at = candidates[p]! * rank;
      for (let i = 0; i < rank; i += 1) {
        const x = entries[at + i]!;
        if (x === 0) continue;
        meets[i]! += 1;
        squares[i]! += x * x;
      }
    }
    let row = -1;
    for (let i = 0; i < rank; i += 1) {
      if (rest[i] === 0) continue;
      if (meets[i] === 0 || (once && squares[i]! < rest[i]!)) return;
      if (row < 0 || meets[i]! < meets[row]!) row = i;
    }
    if (row < 0) return;
    level.row = row;
    if (level.branch.length < meets[row]!) level.branch = new Int32Array(meets[row]!);
    for (let p = 0; p < count; p += 1) {
      if (entries[candidates[p]! * rank + row] === 0) continue;
      level.branch[level.children] = p;
      level.children += 1;
    }
  }

  /** Is the candidate at this place out below the child that was listed last? */
  protected isOut(level: L, place: number): boolean {
    return place < level.branch[level.at]! && level.entries[level.candidates[place]! * this.rank + level.row] !== 0;
  }

  /** The columns chosen along the path, the child listed last at the deepest level included. */
  orbit(depth: number): FoundOrbit {
    const classes = new Map<string, { entries: number[]; count: number }>();
    let nonzero = 0;
    for (let k = 0; k <= depth; k += 1) {
      const level = this.levels[k]!;
      const at = this.chosen(level) * this.rank;
      const column = Array.from(level.entries.subarray(at, at + this.rank));
      const lead = column.find((x) => x !== 0);
      if (lead === undefined) continue;
      nonzero += 1;
      const entries = lead < 0 ? column.map((x) => 0 - x) : column;
      const key = entries.join(' ');
      const known = classes.get(key);
      if (known === undefined) classes.set(key, { entries, count: 1 });
      else known.count += 1;
    }
    return { columns: [...classes.values()], zeros: this.dimension - nonzero };
  }

  get bytes(): number {
    return this.levels.reduce(
      (sum, l, depth) =>
        sum +
        (depth > 0 && this.levels[depth - 1]!.entries === l.entries ? 0 : l.entries.byteLength) +
        4 * (l.candidates.length + l.branch.length) +
        8 * this.rank +
        64,
      0,
    );
  }
}

export function emptyLevel(rank: number): VectorLevel {
  return {
    entries: new Int32Array(0),
    candidates: new Int32Array(16),
    count: 0,
    rest: new Float64Array(rank),
    branch: new Int32Array(16),
    children: 0,
    row: 0,
    at: -1,
  };
}

/** Every place of a list, as candidates of a root. */
export function allPlaces(count: number): Int32Array {
  return Int32Array.from({ length: count }, (_, i) => i);
}
