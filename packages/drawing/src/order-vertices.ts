/**
 * In which order the vertices stand on the bar. Chain: along the chain. Star: longest leg reversed, centre, then the
 * other legs by length, shortest first, so that arcs are few and short. Any other tree: depth first from an end of a
 * longest path, heaviest branch first. What has a cycle stays as typed. Names stay attached: the order is only a drawing.
 */
import { componentsOf, isTree, neighboursOf, type Graph, type Neighbours } from './graph.ts';

export interface RootedOrder {
  /** Vertices in drawing order. */
  readonly order: readonly number[];
  /** Parent of each vertex where its component is a tree, −1 at a root; null for a component with a cycle. */
  readonly parent: readonly (number | null)[];
}

export function rootedOrder(graph: Graph): RootedOrder {
  const neighbours = neighboursOf(graph);
  const parent = new Array<number | null>(graph.size).fill(null);
  const order: number[] = [];
  for (const component of componentsOf(neighbours)) {
    if (isTree(component, neighbours)) plantTree(component, neighbours, order, parent);
    else order.push(...component);
  }
  return { order, parent };
}

/** Positions on the bar: `vertexOrder(graph)[place]` is a vertex. */
export function vertexOrder(graph: Graph): readonly number[] {
  return rootedOrder(graph).order;
}

function plantTree(
  component: readonly number[],
  neighbours: Neighbours,
  order: number[],
  parent: (number | null)[],
): void {
  const branching = component.filter((v) => neighbours[v]!.length > 2);
  const star = branching.length === 1;
  const root =
    branching.length === 0
      ? firstEnd(component, neighbours)
      : star
        ? tipOfLongestLeg(branching[0]!, neighbours)
        : endOfLongestPath(component, neighbours);
  const walk = preorder(root, neighbours, parent);
  const weight = branchSizes(walk, parent);
  const children = new Map<number, number[]>();
  for (const v of walk) {
    const p = parent[v]!;
    if (p < 0) continue;
    const siblings = children.get(p);
    if (siblings === undefined) children.set(p, [v]);
    else siblings.push(v);
  }
  // legs of a star shortest first, branches of any other tree heaviest first; equals by their number
  for (const siblings of children.values())
    siblings.sort((a, b) => (star ? weight.get(a)! - weight.get(b)! : weight.get(b)! - weight.get(a)!) || a - b);
  const stack = [root];
  while (stack.length > 0) {
    const v = stack.pop()!;
    order.push(v);
    const below = children.get(v) ?? [];
    for (let i = below.length - 1; i >= 0; i -= 1) stack.push(below[i]!);
  }
}

function firstEnd(component: readonly number[], neighbours: Neighbours): number {
  return component.find((v) => neighbours[v]!.length <= 1)!;
}

function tipOfLongestLeg(centre: number, neighbours: Neighbours): number {
  let best = { tip: centre, length: 0 };
  for (const first of [...neighbours[centre]!].sort((a, b) => a - b)) {
    let [before, at, length] = [centre, first, 1];
    for (;;) {
      const next = neighbours[at]!.find((v) => v !== before);
      if (next === undefined) break;
      [before, at, length] = [at, next, length + 1];
    }
    if (length > best.length) best = { tip: at, length };
  }
  return best.tip;
}

/** Two sweeps: the vertex farthest from the first, then the one farthest from that; the lower of the two ends. */
function endOfLongestPath(component: readonly number[], neighbours: Neighbours): number {
  const one = farthest(component[0]!, neighbours);
  const other = farthest(one, neighbours);
  return Math.min(one, other);
}

function farthest(from: number, neighbours: Neighbours): number {
  const distance = new Map([[from, 0]]);
  const queue = [from];
  let best = from;
  for (let at = 0; at < queue.length; at += 1) {
    const v = queue[at]!;
    const d = distance.get(v)!;
    const record = distance.get(best)!;
    if (d > record || (d === record && v < best)) best = v;
    for (const next of neighbours[v]!) {
      if (distance.has(next)) continue;
      distance.set(next, d + 1);
      queue.push(next);
    }
  }
  return best;
}

function preorder(root: number, neighbours: Neighbours, parent: (number | null)[]): number[] {
  const walk: number[] = [];
  const stack = [root];
  parent[root] = -1;
  while (stack.length > 0) {
    const v = stack.pop()!;
    walk.push(v);
    for (const next of neighbours[v]!) {
      if (next === parent[v]) continue;
      parent[next] = v;
      stack.push(next);
    }
  }
  return walk;
}

function branchSizes(walk: readonly number[], parent: readonly (number | null)[]): Map<number, number> {
  const size = new Map<number, number>();
  for (let i = walk.length - 1; i >= 0; i -= 1) {
    const v = walk[i]!;
    const own = (size.get(v) ?? 0) + 1;
    size.set(v, own);
    const p = parent[v]!;
    if (p >= 0) size.set(p, (size.get(p) ?? 0) + own);
  }
  return size;
}
