/**
 * Where the vertices of a graph stand on a grid. Trees: the root at the left, the first branch of a vertex goes straight
 * on, each further one begins a new row below, as high as what is above it allows. Long runs of equal vertices can be
 * folded to their two ends. Components stand one below the other. A graph with a cycle stands on a circle.
 */
import { componentsOf, isTree, neighboursOf, type Graph } from './graph.ts';
import { rootedOrder } from './order-vertices.ts';

export interface PlacedVertex {
  readonly vertex: number;
  readonly column: number;
  readonly row: number;
  /** First row of its tree. */
  readonly top: boolean;
  /** A branch leaves it downwards. */
  readonly branches: boolean;
}

/** A run of equal vertices of which only the ends stand: `count` in all, both ends included. */
export interface Fold {
  readonly from: number;
  readonly to: number;
  readonly count: number;
}

export interface Places {
  readonly vertices: readonly PlacedVertex[];
  readonly folds: readonly Fold[];
  readonly columns: number;
  readonly rows: number;
}

export interface PlaceOptions {
  /** Runs of so many equal vertices are folded; never, if left out. */
  readonly foldFrom?: number;
  /** What makes two vertices equal for folding. */
  readonly alike?: (a: number, b: number) => boolean;
}

/** A circle holds so many vertices; a bigger graph with a cycle is not drawn. */
const CIRCLE_LIMIT = 24;

/** Places every vertex, or none (null) where a picture would say nothing. */
export function placeGraph(graph: Graph, options: PlaceOptions = {}): Places | null {
  const neighbours = neighboursOf(graph);
  const { order, parent } = rootedOrder(graph);
  const children: number[][] = Array.from({ length: graph.size }, () => []);
  for (const v of order) if (parent[v] !== null && parent[v]! >= 0) children[parent[v]!]!.push(v);

  const vertices: PlacedVertex[] = [];
  const folds: Fold[] = [];
  let columns = 0;
  let row = 0;
  let at = 0;
  for (const component of componentsOf(neighbours)) {
    const members = order.slice(at, at + component.length);
    at += component.length;
    if (!isTree(component, neighbours)) {
      if (component.length > CIRCLE_LIMIT) return null;
      const circle = placeCircle(component, row);
      vertices.push(...circle.vertices);
      row += circle.side;
      columns = Math.max(columns, circle.side);
      continue;
    }
    const kept = foldRuns(members, children, negativeEnds(graph), options);
    folds.push(...kept.folds);
    const tree = placeTree(members[0]!, kept.children, kept.step, row);
    vertices.push(...tree);
    for (const v of tree) {
      row = Math.max(row, v.row);
      columns = Math.max(columns, v.column + 1);
    }
    row += 1;
  }
  return { vertices, folds, columns, rows: row };
}

/** Lower ends of the edges that a fold must not hide. */
function negativeEnds(graph: Graph): ReadonlySet<string> {
  return new Set(graph.edges.filter(([, , value]) => value !== 1).flatMap(([a, b]) => [`${a} ${b}`, `${b} ${a}`]));
}

interface Kept {
  readonly children: readonly (readonly number[])[];
  /** Columns from a vertex to the next one that stands: 2 over a fold. */
  readonly step: ReadonlyMap<number, number>;
  readonly folds: Fold[];
}

function foldRuns(
  members: readonly number[],
  children: readonly (readonly number[])[],
  special: ReadonlySet<string>,
  { foldFrom = Infinity, alike = () => false }: PlaceOptions,
): Kept {
  const kept = [...children];
  const step = new Map<number, number>();
  const folds: Fold[] = [];
  const inside = new Set<number>();
  for (const start of members) {
    if (inside.has(start)) continue;
    const run = [start];
    for (;;) {
      const last = run.at(-1)!;
      const [next, more] = children[last]!;
      if (next === undefined || more !== undefined || !alike(start, next) || special.has(`${last} ${next}`)) break;
      if (children[next]!.length > 1) break;
      run.push(next);
    }
    if (run.length < foldFrom) continue;
    const end = run.at(-1)!;
    run.forEach((v) => inside.add(v));
    kept[start] = [end];
    step.set(end, 2);
    folds.push({ from: start, to: end, count: run.length });
  }
  return { children: kept, step, folds };
}

function placeTree(
  root: number,
  children: readonly (readonly number[])[],
  step: ReadonlyMap<number, number>,
  firstRow: number,
): PlacedVertex[] {
  const reach = reachOf(root, children, step);
  const bottom: number[] = [];
  const placed: PlacedVertex[] = [];
  const stack: { v: number; column: number; row: number | null }[] = [{ v: root, column: 0, row: firstRow }];
  while (stack.length > 0) {
    const { v, column, row: given } = stack.pop()!;
    let row = given ?? firstRow;
    if (given === null)
      for (let c = column; c <= column + reach.get(v)!; c += 1) row = Math.max(row, (bottom[c] ?? firstRow - 1) + 1);
    bottom[column] = Math.max(bottom[column] ?? firstRow - 1, row);
    const below = children[v]!;
    placed.push({ vertex: v, column, row, top: row === firstRow, branches: below.length > 1 });
    for (let i = below.length - 1; i >= 0; i -= 1) {
      const w = below[i]!;
      stack.push({ v: w, column: column + (step.get(w) ?? 1), row: i === 0 ? row : null });
    }
  }
  return placed;
}

/** How many columns each branch takes to the right of its vertex. */
function reachOf(
  root: number,
  children: readonly (readonly number[])[],
  step: ReadonlyMap<number, number>,
): Map<number, number> {
  const walk = [root];
  for (let at = 0; at < walk.length; at += 1) walk.push(...children[walk[at]!]!);
  const reach = new Map<number, number>();
  for (const v of walk.reverse())
    reach.set(v, Math.max(0, ...children[v]!.map((w) => reach.get(w)! + (step.get(w) ?? 1))));
  return reach;
}

function placeCircle(component: readonly number[], firstRow: number): { vertices: PlacedVertex[]; side: number } {
  const count = component.length;
  const radius = Math.max(1, count / (2 * Math.PI));
  const vertices = component.map((vertex, k) => {
    const angle = (2 * Math.PI * k) / count - Math.PI / 2;
    const [x, y] = [radius * (1 + Math.cos(angle)), radius * (1 + Math.sin(angle))];
    return { vertex, column: x, row: firstRow + y, top: Math.sin(angle) < 0.01, branches: false };
  });
  return { vertices, side: Math.ceil(2 * radius) + 1 };
}
