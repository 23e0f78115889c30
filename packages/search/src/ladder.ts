/**
 * The path from the root to the node where the search stands, for every method; and that of the rows: one listing for each depth,
 * reused.
 */
import { BigListing } from './big-listing.ts';
import type { FoundOrbit } from './found.ts';
import { Columns } from './columns.ts';
import { Listing, type Listed, type ListingState } from './listing.ts';
import { ProjectionLadder } from './projection-ladder.ts';
import type { WorkingForm } from './working-form.ts';

export interface Ladder {
  /** Lists the children of the node at `depth` from the beginning. The node was written there by `descend` or is the root. */
  begin(depth: number): void;
  next(depth: number, limit: number): Listed;
  /** Where the listing at `depth` stands (plain JSON), and how to stand there again after `begin`. */
  state(depth: number): unknown;
  restore(depth: number, state: unknown): void;
  /** Is the child that was listed last at `depth` a leaf? */
  childIsLeaf(depth: number): boolean;
  /** Writes the child that was listed last at `depth`, no leaf, as the node at depth + 1. */
  descend(depth: number): void;
  /** The leaf that was listed last at `depth`, as an orbit. */
  orbit(depth: number): FoundOrbit;
  /** Steps of listing so far. */
  readonly steps: number;
  readonly bytes: number;
}

/** Most nonzero columns of a node with children for which the projection bound is used: it costs their square. */
const PROJECTED_COLUMNS = 64;

/** @param dimension n: the root is n zero columns */
export function openRowLadder(form: WorkingForm, dimension: number): Ladder {
  if (form.projection !== null) {
    const columns = form.norms.subarray(0, form.rank - 1).reduce((sum, norm) => sum + norm, 1);
    const cap = Math.min(dimension, columns);
    if (cap <= PROJECTED_COLUMNS) return new ProjectionLadder(form.projection, form.order, dimension, cap);
  }
  return form.small ? new SmallLadder(form, dimension) : new BigLadder(form, dimension);
}

class SmallLadder implements Ladder {
  steps = 0;
  private readonly levels: Listing[] = [];
  private readonly leaf = new Columns();
  constructor(
    private readonly form: WorkingForm,
    dimension: number,
  ) {
    this.level(0).columns.reset(dimension);
  }

  private level(depth: number): Listing {
    return (this.levels[depth] ??= new Listing());
  }

  begin(depth: number): void {
    this.level(depth).begin(depth, this.form.norms[depth]!, this.form.targets[depth]!, this.form.norms);
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
    return depth + 1 === this.form.rank;
  }

  descend(depth: number): void {
    this.levels[depth]!.writeChild(this.level(depth + 1).columns);
  }

  orbit(): FoundOrbit {
    this.levels[this.form.rank - 1]!.writeChild(this.leaf);
    const { leaf } = this;
    const columns = Array.from({ length: leaf.count }, (_, c) => {
      const entries = new Array<number>(this.form.rank).fill(0);
      for (let e = leaf.start[c]!; e < leaf.start[c + 1]!; e += 1)
        entries[this.form.order[leaf.rows[e]!]!] = leaf.vals[e]!;
      return { entries, count: leaf.mult[c]! };
    });
    return { columns, zeros: leaf.zeros };
  }

  get bytes(): number {
    return this.levels.reduce((sum, level) => sum + level.bytes, this.leaf.bytes);
  }
}

class BigLadder implements Ladder {
  steps = 0;
  private readonly levels: BigListing[] = [];
  constructor(
    private readonly form: WorkingForm,
    dimension: number,
  ) {
    this.level(0).reset(dimension);
  }

  private level(depth: number): BigListing {
    return (this.levels[depth] ??= new BigListing());
  }

  begin(depth: number): void {
    this.level(depth).begin(depth, this.form.bigNorms[depth]!, this.form.bigTargets[depth]!, this.form.bigNorms);
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
    return depth + 1 === this.form.rank;
  }

  descend(depth: number): void {
    this.levels[depth]!.writeChild(this.level(depth + 1));
  }

  orbit(): FoundOrbit {
    return this.levels[this.form.rank - 1]!.orbit(this.form.order);
  }

  get bytes(): number {
    return this.levels.reduce((sum, level) => sum + level.bytes, 0);
  }
}
