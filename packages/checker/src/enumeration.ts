/**
 * A run over an interval of the tree of rows: node after node, depth first, on a stack of listings, one for each depth.
 * It can stop after any number of steps, inside a listing too, and go on from a checkpoint.
 */
import { BIGINTS, DOUBLES, type Kind } from './int-kinds.ts';
import { projectionConstants } from './projection-constants.ts';
import { MAX_WIDTH, ProjectionListing } from './projection-listing.ts';
import { sparseChild, type Column, type SparseNode } from './sparse-columns.ts';
import { SparseListing } from './sparse-listing.ts';
import { END, FOUND, type Steps } from './steps.ts';
import type { CheckInterval, CheckRowsTree, CheckRun } from './tree.ts';

/** Norms below this keep every product that `SparseListing` forms below 2^53. */
const DOUBLE_BOUND = 2n ** 25n;
/** Steps of a listing that count as the work of one node. */
const STEPS_PER_NODE = 32;

type Level =
  | { readonly by: 'projection'; readonly listing: ProjectionListing; taken: number }
  | { readonly by: 'sparse'; readonly listing: SparseListing; readonly node: SparseNode; taken: number };

/** Where a run stands. `at` null: not begun. `place`: of the listing below the node `at`, null at a leaf. */
interface SavedRun {
  readonly at: readonly number[] | null;
  readonly taken: number;
  readonly place: readonly (readonly string[])[] | null;
  readonly nodes: string;
  readonly orbits: string;
  readonly done: boolean;
}

export class Enumeration implements CheckRun {
  /** Told the address of every node at the last depth. */
  onLeaf: ((address: number[]) => void) | undefined;
  private nodeCount = 0;
  private orbitCount = 0;
  private readonly rank: number;
  private readonly dimension: number;
  private readonly projections: readonly ProjectionListing[];
  private readonly projectionRows: readonly Float64Array[];
  private readonly kind: Kind;
  private readonly gram: CheckRowsTree['gram'];
  /** The listing below the node at each depth of the path. */
  private readonly levels: Level[] = [];
  private readonly path: number[] = [];
  private state: 'new' | 'running' | 'done' = 'new';
  private readonly steps: Steps = { left: 0 };

  constructor(
    tree: CheckRowsTree,
    private readonly interval: CheckInterval,
    checkpoint?: string,
  ) {
    this.rank = tree.gram.length;
    this.dimension = tree.dimension;
    this.gram = tree.gram;
    this.kind = tree.gram.every((row, i) => row[i]! < DOUBLE_BOUND) ? DOUBLES : BIGINTS;
    this.projections = projectionConstants(tree.gram, MAX_WIDTH).map((at) => new ProjectionListing(at));
    this.projectionRows = this.projections.map((listing) => listing.row);
    if (checkpoint !== undefined) this.resume(JSON.parse(checkpoint) as SavedRun);
  }

  get nodes(): bigint {
    return BigInt(this.nodeCount);
  }

  get orbits(): bigint {
    return BigInt(this.orbitCount);
  }

  advance(nodes: number): 'more' | 'done' {
    if (this.state === 'done') return 'done';
    this.steps.left = Math.max(1, nodes * STEPS_PER_NODE);
    if (this.state === 'new') {
      this.state = 'running';
      if (this.beyond(this.interval.from)) return this.finish();
      this.goTo(this.interval.from);
      this.count();
    }
    while (this.steps.left > 0) {
      const depth = this.path.length;
      if (depth === this.rank) {
        if (depth === 0) return this.finish();
        this.path.pop();
        continue;
      }
      const level = this.levels[depth]!;
      const answer = level.listing.next(this.steps);
      if (answer === END) {
        if (depth === 0) return this.finish();
        this.path.pop();
      } else if (answer === FOUND) {
        this.enter(level);
        if (this.interval.to !== null && this.beyond(this.path)) return this.finish();
        this.count();
      }
    }
    return 'more';
  }

  private finish(): 'done' {
    this.state = 'done';
    return 'done';
  }

  private count(): void {
    this.nodeCount += 1;
    if (this.path.length < this.rank) return;
    this.orbitCount += 1;
    this.onLeaf?.([...this.path]);
  }

  /** Steps down to the child that stands in a listing. */
  private enter(level: Level): void {
    const depth = this.path.length + 1;
    this.path.push(level.taken);
    level.taken += 1;
    this.steps.left -= 1;
    if (depth < this.rank) this.open(depth, level);
  }

  private open(depth: number, parent: Level | null): void {
    const projection = this.projections[depth];
    if (parent === null) {
      if (projection === undefined) this.openSparse(depth, { columns: [], zeros: this.dimension });
      else {
        projection.openRoot(this.dimension);
        this.levels[depth] = { by: 'projection', listing: projection, taken: 0 };
      }
    } else if (parent.by === 'sparse') {
      this.openSparse(depth, sparseChild(parent.node, depth - 1, parent.listing.filling));
    } else {
      const { listing } = parent;
      const width = listing.width + listing.parts.length;
      if (projection === undefined || width > MAX_WIDTH) this.openSparse(depth, this.gather(depth, listing));
      else {
        projection.openChild(listing, this.projectionRows);
        this.steps.left -= width;
        this.levels[depth] = { by: 'projection', listing: projection, taken: 0 };
      }
    }
  }

  private openSparse(depth: number, node: SparseNode): void {
    const { fromBig } = this.kind;
    const listing = new SparseListing(
      this.kind,
      fromBig(this.gram[depth]![depth]!),
      this.gram[depth]!.slice(0, depth).map(fromBig),
      this.gram.slice(0, depth).map((row, i) => fromBig(row[i]!)),
    );
    listing.open(node);
    this.steps.left -= node.columns.length;
    this.levels[depth] = { by: 'sparse', listing, node, taken: 0 };
  }

  /** The node of the child that stands in a listing by projection, as sparse columns. */
  private gather(depth: number, listing: ProjectionListing): SparseNode {
    const { kind } = this;
    const classes = new Map<string, { count: number; rows: number[]; entries: number[] }>();
    const columns: Column[] = [];
    for (let i = 0; i < listing.width + listing.parts.length; i += 1) {
      const column = Array.from({ length: depth }, (_, k) => {
        if (k === depth - 1) return i < listing.width ? listing.row[i]! : listing.parts.part(i - listing.width);
        return i < listing.width ? this.projectionRows[k]![i]! : 0;
      });
      const key = column.join();
      const old = classes.get(key);
      if (old !== undefined) {
        old.count += 1;
        continue;
      }
      const rows = [...column.keys()].filter((k) => column[k] !== 0);
      const entry = { count: 1, rows, entries: rows.map((k) => kind.of(column[k]!)) };
      classes.set(key, entry);
      columns.push(entry);
    }
    return { columns, zeros: listing.zeros - listing.parts.length };
  }

  /** Goes to a node by listing again. */
  private goTo(address: readonly number[]): void {
    if (this.rank > 0) this.open(0, null);
    const unlimited: Steps = { left: Infinity };
    for (const place of address) {
      const level = this.levels[this.path.length]!;
      for (; level.taken <= place; level.taken += 1)
        if (level.listing.next(unlimited) === END) throw new RangeError('an address without a node');
      level.taken -= 1;
      this.enter(level);
    }
  }

  /** Whether an address is `to` or comes after it. */
  private beyond(address: readonly number[]): boolean {
    const { to } = this.interval;
    if (to === null) return false;
    for (let i = 0; i < Math.min(address.length, to.length); i += 1)
      if (address[i] !== to[i]) return address[i]! > to[i]!;
    return address.length >= to.length;
  }

  checkpoint(): string {
    const level = this.path.length < this.rank ? this.levels[this.path.length] : undefined;
    const saved: SavedRun = {
      at: this.state === 'new' ? null : this.path,
      taken: level?.taken ?? 0,
      place: this.state === 'running' ? (level?.listing.savedPlace() ?? null) : null,
      nodes: String(this.nodeCount),
      orbits: String(this.orbitCount),
      done: this.state === 'done',
    };
    return JSON.stringify(saved);
  }

  private resume(saved: SavedRun): void {
    this.nodeCount = Number(saved.nodes);
    this.orbitCount = Number(saved.orbits);
    if (saved.at === null) return;
    this.state = saved.done ? 'done' : 'running';
    if (saved.done) return;
    this.goTo(saved.at);
    const level = this.levels[this.path.length];
    if (this.path.length === this.rank || saved.place === null || level === undefined) return;
    level.taken = saved.taken;
    if (level.by === 'projection') level.listing.reopen(saved.place);
    else level.listing.reopen(level.node, saved.place);
  }

  get shareDone(): number {
    if (this.state === 'done') return 1;
    const { from, to } = this.interval;
    const depth = to?.findIndex((x, i) => x !== from[i]) ?? -1;
    if (to === null || depth < 0 || depth >= this.path.length) return 0;
    const first = from[depth] ?? 0;
    return Math.max(0, Math.min(1, (this.path[depth]! - first) / Math.max(1, to[depth]! - first)));
  }
}
