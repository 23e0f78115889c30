/**
 * A run over an interval of a tree of frames or of columns, depth first, that can stop after any number of nodes and go on. Its `nodes` are
 * not nodes: the run that begins at the root tells how many columns are admissible, the others 0, so that the sum is what the certificate
 * calls `vectors`.
 */
import { listColumns, type DualColumns } from './dual-columns.ts';
import { dualForm, type DualForm } from './dual-form.ts';
import type { CheckInterval, CheckRun, CheckTree } from './tree.ts';
import { VectorTree, type Branches, type State } from './vector-tree.ts';

interface Level {
  readonly state: State;
  readonly branches: Branches;
  /** The next child. */
  next: number;
}

interface SavedRun {
  /** Null: not begun. Otherwise the node that was entered last, and the number of its next child. */
  readonly path: readonly number[] | null;
  readonly next: number;
  readonly orbits: string;
  readonly done: boolean;
}

interface Prepared {
  readonly form: DualForm;
  readonly columns: DualColumns;
}

/** Lists of columns are the same for all runs of a tree. */
const prepared = new WeakMap<CheckTree, Prepared>();

export function prepare(tree: CheckTree): Prepared {
  const known = prepared.get(tree);
  if (known !== undefined) return known;
  const form = dualForm(tree.gram);
  const excess = tree.dimension === null ? Infinity : tree.dimension - form.rank;
  const columns = listColumns(form, tree.method === 'columns' || excess > 1 ? 'all' : excess === 1 ? 'square' : 'unit');
  const fresh = { form, columns };
  prepared.set(tree, fresh);
  return fresh;
}

export class VectorRun implements CheckRun {
  orbits = 0n;
  private readonly tree: VectorTree;
  private readonly vectors: bigint;
  private readonly levels: Level[] = [];
  private readonly path: number[] = [];
  private state: 'new' | 'running' | 'done' = 'new';

  constructor(
    tree: CheckTree,
    private readonly interval: CheckInterval,
    checkpoint?: string,
  ) {
    const { form, columns } = prepare(tree);
    this.tree = new VectorTree(form, columns, tree.dimension);
    this.vectors = interval.from.length === 0 ? BigInt(columns.admissible) : 0n;
    if (checkpoint !== undefined) this.resume(JSON.parse(checkpoint) as SavedRun);
  }

  get nodes(): bigint {
    return this.state === 'new' ? 0n : this.vectors;
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
      const level = this.levels.at(-1)!;
      if (level.next >= level.branches.at.length) {
        this.levels.pop();
        this.path.pop();
        if (this.levels.length === 0) return this.finish();
        continue;
      }
      this.enter(level, level.next);
      if (this.beyond(this.path)) return this.finish();
      this.count();
    }
    return 'more';
  }

  private finish(): 'done' {
    this.state = 'done';
    return 'done';
  }

  private count(): void {
    const { state } = this.levels.at(-1)!;
    if (this.tree.isLeaf(state) && this.tree.counts(state)) this.orbits += 1n;
  }

  private enter(level: Level, child: number): void {
    level.next = child + 1;
    this.path.push(child);
    this.push(this.tree.child(level.state, level.branches, level.branches.at[child]!));
  }

  private push(state: State): void {
    const branches = this.tree.isLeaf(state) ? { row: 0, at: [] } : this.tree.branches(state);
    this.levels.push({ state, branches, next: 0 });
  }

  private goTo(address: readonly number[]): void {
    this.push(this.tree.root());
    for (const child of address) {
      const level = this.levels.at(-1)!;
      if (child >= level.branches.at.length) throw new RangeError('an address without a node');
      this.enter(level, child);
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
    const saved: SavedRun = {
      path: this.state === 'new' ? null : this.path,
      next: this.levels.at(-1)?.next ?? 0,
      orbits: String(this.orbits),
      done: this.state === 'done',
    };
    return JSON.stringify(saved);
  }

  private resume(saved: SavedRun): void {
    this.orbits = BigInt(saved.orbits);
    if (saved.path === null) return;
    this.state = saved.done ? 'done' : 'running';
    if (saved.done) return;
    this.goTo(saved.path);
    this.levels.at(-1)!.next = saved.next;
  }

  get shareDone(): number {
    if (this.state !== 'running') return this.state === 'done' ? 1 : 0;
    const [root] = this.levels;
    const children = root?.branches.at.length ?? 0;
    const first = this.interval.from[0] ?? 0;
    const last = this.interval.to?.[0] ?? children;
    return root === undefined || last <= first ? 0 : Math.max(0, Math.min(1, (root.next - 1 - first) / (last - first)));
  }
}

/** Intervals at the children of the root. */
export function splitVectors(tree: CheckTree, pieces: number): CheckInterval[] {
  const { form, columns } = prepare(tree);
  const vectors = new VectorTree(form, columns, tree.dimension);
  const root = vectors.root();
  const children = vectors.isLeaf(root) ? 0 : vectors.branches(root).at.length;
  const stride = Math.max(1, Math.ceil(children / pieces));
  const starts: number[][] = [[]];
  for (let k = stride; k < children; k += stride) starts.push([k]);
  return starts.map((from, i) => ({ from, to: starts[i + 1] ?? null }));
}
