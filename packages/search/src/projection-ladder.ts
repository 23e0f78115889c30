/** The path from the root to a node, with the projection bound at each depth: see `projection-listing.ts`. */
import type { FoundOrbit } from './found.ts';
import type { Ladder } from './ladder.ts';
import type { Listed, ListingState } from './listing.ts';
import type { ProjectionForm } from './projection-form.ts';
import { nearest } from './pivots.ts';
import { ProjectionListing } from './projection-listing.ts';

export class ProjectionLadder implements Ladder {
  steps = 0;
  private readonly levels: ProjectionListing[] = [];
  private readonly rank: number;

  /** @param cap most columns that a node with children can have; @param order row of W at each depth */
  constructor(
    private readonly form: ProjectionForm,
    private readonly order: readonly number[],
    dimension: number,
    private readonly cap: number,
  ) {
    this.rank = order.length;
    this.level(0).zeros = dimension;
  }

  private level(depth: number): ProjectionListing {
    return (this.levels[depth] ??= new ProjectionListing(this.cap));
  }

  begin(depth: number): void {
    const { minors, shadows } = this.form;
    const level = this.level(depth);
    const before = level.steps;
    const shadow = shadows[depth]!;
    for (let a = 0; a < level.classes; a += 1) {
      let sum = 0;
      for (let d = depth, c = a; d > 0 && c >= 0; d -= 1) {
        const { value, parent } = this.levels[d]!;
        sum += shadow[d - 1]! * value[c]!;
        c = parent[c]!;
      }
      level.centre[a] = sum;
    }
    level.begin(depth, minors[depth]!, minors[depth + 1]!);
    this.steps += level.steps - before;
  }

  next(depth: number, limit: number): Listed {
    const level = this.levels[depth]!;
    const before = level.steps;
    const listed = level.next(limit);
    this.steps += level.steps - before;
    return listed;
  }

  state(depth: number): ListingState {
    return this.levels[depth]!.state();
  }

  restore(depth: number, state: unknown): void {
    this.levels[depth]!.restore(state as ListingState);
  }

  childIsLeaf(depth: number): boolean {
    return depth + 1 === this.rank;
  }

  descend(depth: number): void {
    const from = this.levels[depth]!;
    const to = this.level(depth + 1);
    const { parent, value, mult } = to;
    let count = 0;
    for (let a = 0; a < from.classes; a += 1) {
      const end = from.first[a]! + from.mult[a]!;
      for (let column = from.first[a]!; column < end; column += 1) {
        const v = from.x[column]!;
        if (column > from.first[a]! && v === from.x[column - 1]!) mult[count - 1]! += 1;
        else {
          parent[count] = a;
          value[count] = v;
          mult[count] = 1;
          count += 1;
        }
      }
    }
    const old = count;
    const { values, length } = from.squares;
    for (let i = 0; i < length; i += 1) {
      if (i > 0 && values[i] === values[i - 1]) mult[count - 1]! += 1;
      else {
        parent[count] = -1;
        value[count] = values[i]!;
        mult[count] = 1;
        count += 1;
      }
    }
    to.classes = count;
    to.zeros = from.zeros - length;
    this.project(depth, from, to, old);
  }

  /** g of the child: g' = (D'·g + u·uᵀ) / D, where u is D times the part of the new row outside the span of the others. */
  private project(depth: number, from: ProjectionListing, to: ProjectionListing, old: number): void {
    const { cap } = this;
    const minor = this.form.minors[depth]!;
    const over = 1 / minor;
    const next = this.form.minors[depth + 1]!;
    const { parent, value, outside } = to;
    for (let a = 0; a < to.classes; a += 1) outside[a] = minor * value[a]! - (a < old ? from.centre[parent[a]!]! : 0);
    for (let a = 0; a < to.classes; a += 1) {
      const u = outside[a]!;
      const at = a * cap;
      if (a < old) {
        const above = parent[a]! * cap;
        for (let b = 0; b <= a; b += 1)
          to.g[at + b] = nearest((next * from.g[above + parent[b]!]! + u * outside[b]!) * over);
      } else for (let b = 0; b <= a; b += 1) to.g[at + b] = nearest(u * outside[b]! * over);
    }
  }

  orbit(): FoundOrbit {
    const last = this.rank - 1;
    const from = this.levels[last]!;
    const columns: { entries: number[]; count: number }[] = [];
    const add = (a: number, v: number, count: number) => {
      const entries = new Array<number>(this.rank).fill(0);
      if (v !== 0) entries[this.order[last]!] = v;
      for (let d = last, c = a; d > 0 && c >= 0; d -= 1) {
        const { value, parent } = this.levels[d]!;
        if (value[c] !== 0) entries[this.order[d - 1]!] = value[c]!;
        c = parent[c]!;
      }
      columns.push({ entries, count });
    };
    for (let a = 0; a < from.classes; a += 1)
      eachRun(from.x, from.first[a]!, from.first[a]! + from.mult[a]!, (v, n) => add(a, v, n));
    eachRun(from.squares.values, 0, from.squares.length, (v, n) => add(-1, v, n));
    return { columns, zeros: from.zeros - from.squares.length };
  }

  get bytes(): number {
    return this.levels.reduce((sum, level) => sum + level.bytes, 0);
  }
}

/** Runs of equal values. */
function eachRun(values: Float64Array, from: number, to: number, tell: (value: number, count: number) => void): void {
  for (let i = from; i < to;) {
    let end = i + 1;
    while (end < to && values[end] === values[i]) end += 1;
    tell(values[i]!, end - i);
    i = end;
  }
}
