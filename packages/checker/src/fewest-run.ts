/**
 * Runs over the tree of rows of revision 2 (FORMAT.md): at each node the rows that are left are listed, each as far as the least number of
 * children so far, and the first row of the order with the fewest is placed.
 */
import { BIGINTS, DOUBLES, type Int, type Kind } from './int-kinds.ts';
import { sparseChild, type SparseNode } from './sparse-columns.ts';
import { SparseListing } from './sparse-listing.ts';
import { FOUND } from './steps.ts';
import type { CheckInterval, CheckRowsTree, CheckRun } from './tree.ts';

/** Norms below this keep every product that `SparseListing` forms below 2^53. */
const DOUBLE_BOUND = 2n ** 25n;

interface Level {
  readonly node: SparseNode;
  readonly row: number;
  readonly listing: SparseListing;
  taken: number;
}

interface SavedRun {
  readonly path: readonly number[] | null;
  readonly taken: number;
  readonly nodes: string;
  readonly orbits: string;
  readonly done: boolean;
}

export class FewestRun implements CheckRun {
  nodes = 0n;
  orbits = 0n;
  private readonly rank: number;
  private readonly kind: Kind;
  private readonly gram: readonly (readonly Int[])[];
  private readonly levels: Level[] = [];
  private readonly path: number[] = [];
  private state: 'new' | 'running' | 'done' = 'new';

  constructor(
    private readonly tree: CheckRowsTree,
    private readonly interval: CheckInterval,
    checkpoint?: string,
  ) {
    this.rank = tree.gram.length;
    this.kind = tree.gram.every((row, i) => row[i]! < DOUBLE_BOUND) ? DOUBLES : BIGINTS;
    this.gram = tree.gram.map((row) => row.map(this.kind.fromBig));
    if (checkpoint !== undefined) this.resume(JSON.parse(checkpoint) as SavedRun);
  }

  advance(nodes: number): 'more' | 'done' {
    if (this.state === 'done') return 'done';
    if (this.state === 'new') {
      this.state = 'running';
      if (this.beyond(this.interval.from)) return this.finish();
      this.goTo(this.interval.from);
      this.count();
    }
    for (let left = Math.max(1, nodes); left > 0; left -= 1) {
      // at a leaf there is no level for its own children
      if (this.path.length === this.rank) {
        if (!this.up()) return this.finish();
        continue;
      }
      const level = this.levels[this.path.length]!;
      if (level.listing.next({ left: Infinity }) !== FOUND) {
        if (!this.up()) return this.finish();
        continue;
      }
      this.enter(level);
      if (this.beyond(this.path)) return this.finish();
      this.count();
    }
    return 'more';
  }

  private finish(): 'done' {
    this.state = 'done';
    return 'done';
  }

  private up(): boolean {
    if (this.path.length === 0) return false;
    this.levels.length = this.path.length;
    this.path.pop();
    return true;
  }

  private count(): void {
    this.nodes += 1n;
    if (this.path.length === this.rank) this.orbits += 1n;
  }

  /** Goes down to the child that stands in a listing. */
  private enter(level: Level): void {
    const depth = this.path.length;
    this.path.push(level.taken);
    level.taken += 1;
    if (depth + 1 < this.rank) this.open(sparseChild(level.node, depth, level.listing.filling));
  }

  private open(node: SparseNode): void {
    const depth = this.path.length;
    const placed = this.levels.slice(0, depth).map((l) => l.row);
    let best = -1;
    let least = Infinity;
    for (let row = 0; row < this.rank && least > 0; row += 1) {
      if (placed.includes(row)) continue;
      const listing = this.listingOf(row, placed, node);
      let count = 0;
      while (count < least && listing.next({ left: Infinity }) === FOUND) count += 1;
      if (count < least) {
        least = count;
        best = row;
      }
    }
    this.levels[depth] = { node, row: best, listing: this.listingOf(best, placed, node), taken: 0 };
  }

  private listingOf(row: number, placed: readonly number[], node: SparseNode): SparseListing {
    const listing = new SparseListing(
      this.kind,
      this.gram[row]![row]!,
      placed.map((other) => this.gram[row]![other]!),
      placed.map((other) => this.gram[other]![other]!),
    );
    listing.open(node);
    return listing;
  }

  /** Goes to a node by listing again. */
  private goTo(address: readonly number[]): void {
    if (this.rank > 0) this.open({ columns: [], zeros: this.tree.dimension });
    for (const place of address) {
      const level = this.levels[this.path.length]!;
      for (; level.taken <= place; level.taken += 1)
        if (level.listing.next({ left: Infinity }) !== FOUND) throw new RangeError('an address without a node');
      level.taken -= 1;
      this.enter(level);
    }
  }

  /** Children of an inner node. */
  childrenAt(address: readonly number[]): number {
    this.goTo(address);
    const { listing } = this.levels[address.length]!;
    let count = 0;
    while (listing.next({ left: Infinity }) === FOUND) count += 1;
    return count;
  }

  /** Whether an address is `to` or comes after it. */
  private beyond(address: readonly number[]): boolean {
    const { to } = this.interval;
    if (to === null) return false;
    const differs = to.findIndex((x, i) => i < address.length && address[i] !== x);
    return differs < 0 ? address.length >= to.length : address[differs]! > to[differs]!;
  }

  checkpoint(): string {
    const saved: SavedRun = {
      path: this.state === 'new' ? null : this.path,
      taken: this.levels[this.path.length]?.taken ?? 0,
      nodes: String(this.nodes),
      orbits: String(this.orbits),
      done: this.state === 'done',
    };
    return JSON.stringify(saved);
  }

  private resume(saved: SavedRun): void {
    this.nodes = BigInt(saved.nodes);
    this.orbits = BigInt(saved.orbits);
    if (saved.path === null) return;
    this.state = saved.done ? 'done' : 'running';
    if (saved.done) return;
    this.goTo(saved.path);
    const level = this.levels[this.path.length];
    if (this.path.length === this.rank || level === undefined) return;
    for (; level.taken < saved.taken; level.taken += 1) level.listing.next({ left: Infinity });
  }

  get shareDone(): number {
    if (this.state === 'done') return 1;
    const root = this.levels[0];
    return root === undefined ? 0 : Math.min(1, root.taken / (root.taken + 1));
  }
}

/** The first nodes below the root, as pieces that abut. */
export function splitFewest(tree: CheckRowsTree, pieces: number): CheckInterval[] {
  let addresses: number[][] = [[]];
  for (let depth = 1; depth < tree.gram.length && addresses.length < 4 * pieces; depth += 1) {
    const next = childrenOf(tree, addresses, 64 * pieces);
    if (next === null || next.length === 0) break;
    addresses = next;
  }
  const stride = Math.max(1, Math.ceil(addresses.length / pieces));
  const starts = [[], ...addresses.filter((_, i) => i > 0 && i % stride === 0)];
  return starts.map((from, i) => ({ from, to: starts[i + 1] ?? null }));
}

/** Addresses of all children of nodes, in order; null if there are more than `most`. */
function childrenOf(tree: CheckRowsTree, parents: readonly (readonly number[])[], most: number): number[][] | null {
  const out: number[][] = [];
  for (const parent of parents) {
    const count = new FewestRun(tree, { from: [], to: null }).childrenAt(parent);
    if (out.length + count > most) return null;
    for (let k = 0; k < count; k += 1) out.push([...parent, k]);
  }
  return out;
}
