/** Cut and flow lattices of a graph (Bacher–de la Harpe–Nagnibeda, Bull. SMF 125 (1997)). */
import { dot, zeroMatrix } from '@palmette/exact';
import type { BuiltForm, GraphSource } from './source.ts';

interface Graph {
  /** Vertices ascending. */
  readonly vertices: readonly bigint[];
  /** Ends of each edge as places in `vertices`, in the order given. */
  readonly edges: readonly (readonly [number, number])[];
}

export function graphForm(source: GraphSource): BuiltForm {
  const labels = source.edges.map(([a, b]) => [BigInt(a), BigInt(b)] as const);
  const vertices = [...new Set(labels.flat())].sort((a, b) => (a < b ? -1 : 1));
  const place = new Map(vertices.map((v, i) => [v, i]));
  const graph: Graph = { vertices, edges: labels.map(([a, b]) => [place.get(a)!, place.get(b)!] as const) };
  return source.lattice === 'cuts' ? cuts(graph) : flows(graph);
}

/** For each vertex the edge and the vertex by which a breadth-first search from the lowest vertex reached it. */
function breadthFirst(graph: Graph): {
  readonly parent: ({ edge: number; from: number } | null)[];
  readonly roots: ReadonlySet<number>;
} {
  const parent: ({ edge: number; from: number } | null)[] = graph.vertices.map(() => null);
  const seen = new Set<number>();
  const roots = new Set<number>();
  graph.vertices.forEach((_, start) => {
    if (seen.has(start)) return;
    roots.add(start);
    seen.add(start);
    const queue = [start];
    for (let head = 0; head < queue.length; head += 1) {
      const v = queue[head]!;
      graph.edges.forEach(([a, b], edge) => {
        const other = a === v ? b : b === v ? a : -1;
        if (other < 0 || seen.has(other)) return;
        seen.add(other);
        parent[other] = { edge, from: v };
        queue.push(other);
      });
    }
  });
  return { parent, roots };
}

function cuts(graph: Graph): BuiltForm {
  const { roots } = breadthFirst(graph);
  const kept = graph.vertices.flatMap((_, i) => (roots.has(i) ? [] : [i]));
  const place = new Map(kept.map((v, i) => [v, i]));
  const form = zeroMatrix(kept.length, kept.length);
  for (const [a, b] of graph.edges) {
    if (a === b) continue;
    const [i, j] = [place.get(a), place.get(b)];
    if (i !== undefined) form[i]![i]! += 1n;
    if (j !== undefined) form[j]![j]! += 1n;
    if (i !== undefined && j !== undefined) {
      form[i]![j]! -= 1n;
      form[j]![i]! -= 1n;
    }
  }
  return { form, names: kept.map((v) => `${graph.vertices[v]}`), graph: null, remarks: [] };
}

function flows(graph: Graph): BuiltForm {
  const { parent } = breadthFirst(graph);
  const inTree = new Set(parent.flatMap((p) => (p === null ? [] : [p.edge])));
  const cycles = graph.edges.flatMap(([a, b], edge) => {
    if (inTree.has(edge)) return [];
    const flow = new Array<bigint>(graph.edges.length).fill(0n);
    flow[edge] = 1n;
    // back from b to a: up from b against, up from a along; what they share cancels
    addPath(graph, parent, b, flow, 1n);
    addPath(graph, parent, a, flow, -1n);
    return [flow];
  });
  return {
    form: cycles.map((x) => cycles.map((y) => dot(x, y))),
    names: cycles.map((_, i) => `z${i + 1}`),
    graph: null,
    remarks: [],
  };
}

/** Adds the path from a vertex up to its root, times `sign`, to a flow. */
function addPath(
  graph: Graph,
  parent: readonly ({ edge: number; from: number } | null)[],
  from: number,
  flow: bigint[],
  sign: bigint,
): void {
  for (let v = from, step = parent[v]!; step; v = step.from, step = parent[v]!) {
    flow[step.edge]! += graph.edges[step.edge]![0] === v ? sign : -sign;
  }
}
