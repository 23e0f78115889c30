/**
 * The tree of rows, enumerated again by the checker: nodes and orbits of an interval, in the checker's own order of
 * children. A run can stop after any slice of work and go on from a checkpoint; intervals that abut cover the tree.
 */
import { rootOf, type Matrix } from './arithmetic.ts';
import { listChildren, type Int, type Kind } from './list-children.ts';
import { child, type Filling, type NodeColumns } from './node-columns.ts';

/** What has to be enumerated, and what the certificate says about it. */
export interface CheckTree {
  /** Where the tree stands in the certificate. */
  readonly place: string;
  readonly dimension: number;
  /** The working Gram in the order of its rows. */
  readonly gram: Matrix;
  readonly nodes: bigint;
  readonly orbits: bigint;
}

export interface CheckInterval {
  readonly from: readonly number[];
  readonly to: readonly number[] | null;
}

export interface CheckRun {
  /** Works for about this many nodes. */
  advance(nodes: number): 'more' | 'done';
  checkpoint(): string;
  readonly nodes: bigint;
  readonly orbits: bigint;
  /** Part of the interval that is done, as far as the first children of the tree tell. */
  readonly shareDone: number;
}

/** Norms below this keep every product of two intermediates below 2^52. */
const DOUBLE_BOUND = 2n ** 25n;
const TICKS_PER_NODE = 32;

const doubles: Kind = {
  zero: 0,
  one: 1,
  of: (x) => x,
  root: (a) => {
    let root = Math.floor(Math.sqrt(a));
    while (root * root > a) root -= 1;
    while ((root + 1) * (root + 1) <= a) root += 1;
    return root;
  },
  half: (a) => Math.floor(a / 2),
};

/** The same words for bigint; the code that uses a kind has only operators that both share. */
const bigints = {
  zero: 0n,
  one: 1n,
  of: BigInt,
  root: rootOf,
  half: (a: bigint) => a / 2n,
} as unknown as Kind;

export function openCheckRun(tree: CheckTree, interval: CheckInterval, checkpoint?: string): CheckRun {
  const norms = tree.gram.map((row, i) => row[i]!);
  const small = norms.every((norm) => norm < DOUBLE_BOUND) || (norms.length === 1 && norms[0]! < 2n ** 53n);
  const convert = small ? Number : (x: bigint) => x as unknown as Int;
  return new Enumeration(small ? doubles : bigints, tree, interval, convert, checkpoint);
}

/** Where a run stands: the node it is at, how many of its children were entered, and the counts. Null: not begun. */
interface SavedCheck {
  readonly at: readonly number[] | null;
  readonly taken: number;
  readonly nodes: string;
  readonly orbits: string;
}

class Enumeration implements CheckRun {
  nodes = 0n;
  orbits = 0n;
  private readonly rank: number;
  private readonly norms: readonly Int[];
  private readonly inner: readonly (readonly Int[])[];
  /** The node at each depth of the path, the listing of its children, and how many of them were taken. */
  private readonly levels: { node: NodeColumns; listing: Generator<Filling>; taken: number }[] = [];
  private readonly path: number[] = [];
  private state: 'new' | 'running' | 'done' = 'new';
  private ticks = 0;

  constructor(
    private readonly kind: Kind,
    tree: CheckTree,
    private readonly interval: CheckInterval,
    convert: (x: bigint) => Int,
    checkpoint?: string,
  ) {
    this.rank = tree.gram.length;
    this.norms = tree.gram.map((row, i) => convert(row[i]!));
    this.inner = tree.gram.map((row, i) => row.slice(0, i).map(convert));
    this.dimension = tree.dimension;
    if (checkpoint === undefined) return;
    const saved = JSON.parse(checkpoint) as SavedCheck;
    this.nodes = BigInt(saved.nodes);
    this.orbits = BigInt(saved.orbits);
    if (saved.at === null) return;
    this.goTo(saved.at);
    const level = this.levels[this.path.length];
    while (level !== undefined && level.taken < saved.taken) {
      level.listing.next();
      level.taken += 1;
    }
    this.state = 'running';
  }

  private readonly dimension: number;

  advance(nodes: number): 'more' | 'done' {
    if (this.state === 'done') return 'done';
    const last = this.ticks + nodes * TICKS_PER_NODE;
    if (this.state === 'new') {
      this.state = 'running';
      if (this.beyond(this.interval.from)) return this.finish();
      this.goTo(this.interval.from);
      this.count();
    }
    while (this.ticks < last) {
      this.ticks += 1;
      const level = this.levels[this.path.length];
      if (level === undefined || !this.step(level)) {
        if (this.path.length === 0) return this.finish();
        this.path.pop();
        this.levels.length = this.path.length + 1;
      } else if (this.beyond(this.path)) return this.finish();
      else this.count();
    }
    return 'more';
  }

  private finish(): 'done' {
    this.state = 'done';
    return 'done';
  }

  private count(): void {
    this.nodes += 1n;
    if (this.path.length === this.rank) this.orbits += 1n;
  }

  /** Goes to the next child of the last level; false if there is none. */
  private step(level: { node: NodeColumns; listing: Generator<Filling>; taken: number }): boolean {
    const next = level.listing.next();
    if (next.done === true) return false;
    const depth = this.path.length;
    this.path.push(level.taken);
    level.taken += 1;
    if (depth + 1 < this.rank) this.open(child(level.node, depth, next.value));
    return true;
  }

  private open(node: NodeColumns): void {
    const depth = this.path.length;
    const listing = listChildren(
      this.kind,
      node,
      this.norms[depth]!,
      this.inner[depth]!,
      this.norms,
      () => (this.ticks += 1),
    );
    this.levels[depth] = { node, listing, taken: 0 };
  }

  private goTo(address: readonly number[]): void {
    if (this.rank > 0) this.open({ columns: [], zeros: this.dimension });
    for (const place of address) {
      const level = this.levels[this.path.length]!;
      while (level.taken < place) {
        if (level.listing.next().done === true) throw new RangeError('an address without a node');
        level.taken += 1;
      }
      if (!this.step(level)) throw new RangeError('an address without a node');
    }
  }

  private beyond(address: readonly number[]): boolean {
    const { to } = this.interval;
    if (to === null) return false;
    for (let i = 0; i < Math.min(address.length, to.length); i += 1)
      if (address[i] !== to[i]) return address[i]! > to[i]!;
    return address.length >= to.length;
  }

  checkpoint(): string {
    const saved: SavedCheck = {
      at: this.state === 'new' ? null : this.path,
      taken: this.levels[this.path.length]?.taken ?? 0,
      nodes: this.nodes.toString(),
      orbits: this.orbits.toString(),
    };
    return JSON.stringify(saved);
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

/** About `pieces` intervals that abut from the root to the end: cut at the nodes of one depth. */
export function splitCheck(tree: CheckTree, pieces: number): CheckInterval[] {
  let cuts: number[][] = [];
  for (let depth = 1; depth <= tree.gram.length && cuts.length < pieces; depth += 1) {
    const next = nodesAtDepth(tree, depth, pieces * 64);
    if (next === null) break;
    cuts = next;
  }
  const stride = Math.max(1, Math.ceil(cuts.length / pieces));
  const starts = [[], ...cuts.filter((_, i) => i > 0 && i % stride === 0)];
  return starts.map((from, i) => ({ from, to: starts[i + 1] ?? null }));
}

/** Addresses of all nodes at a depth, or null if there are more than `most`. */
function nodesAtDepth(tree: CheckTree, depth: number, most: number): number[][] | null {
  const shallow: CheckTree = { ...tree, gram: tree.gram.slice(0, depth).map((row) => row.slice(0, depth)) };
  const run = openCheckRun(shallow, { from: [], to: null });
  const out: number[][] = [];
  let before = 0n;
  for (let end = run.advance(0); end === 'more'; end = run.advance(1 / TICKS_PER_NODE)) {
    if (run.orbits > before) {
      before = run.orbits;
      out.push((JSON.parse(run.checkpoint()) as { at: number[] }).at);
      if (out.length > most) return null;
    }
  }
  return out;
}
