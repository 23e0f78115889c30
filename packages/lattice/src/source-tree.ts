/** Plumbing trees and bare plumbing graphs as typed. */
import { plumbingForm } from './plumbing.ts';
import { SourceFault, type BuiltForm, type TreeSource } from './source.ts';

export function treeForm(source: TreeSource): BuiltForm {
  const places = new Map<string, number>();
  source.vertices.forEach(({ name }, i) => {
    const before = places.get(name);
    if (before !== undefined)
      throw new SourceFault(
        `/vertices/${i}/name`,
        `expected a name of its own, found ${JSON.stringify(name)} again (vertex ${before + 1} has it)`,
      );
    places.set(name, i);
  });
  const seen = new Map<string, number>();
  const edges = source.edges.map((edge, k): [number, number, 1 | -1] => {
    const [i, j] = [0, 1].map((end) => {
      const name = edge[end] as string;
      const place = places.get(name);
      if (place === undefined)
        throw new SourceFault(`/edges/${k}/${end}`, `expected the name of a vertex, found ${JSON.stringify(name)}`);
      return place;
    }) as [number, number];
    if (i === j)
      throw new SourceFault(
        `/edges/${k}`,
        `expected an edge between two vertices, found a loop at ${JSON.stringify(edge[0])}`,
      );
    const key = i < j ? `${i} ${j}` : `${j} ${i}`;
    const before = seen.get(key);
    if (before !== undefined)
      throw new SourceFault(
        `/edges/${k}`,
        `expected an edge of its own, found the edge ${edge[0]}–${edge[1]} again (edge ${before + 1} is the same)`,
      );
    seen.set(key, k);
    return [i, j, edge[2] ?? 1];
  });
  const graph = { vertices: source.vertices.map((v) => ({ name: v.name, weight: BigInt(v.weight) })), edges };
  const remarks: string[] = [];
  if (hasCycle(graph.vertices.length, edges))
    remarks.push('The graph has a cycle: the form is as drawn, but the manifold of a cycle needs more data than this.');
  if (graph.vertices.some((v) => v.weight === 1n || v.weight === -1n))
    remarks.push('A vertex of weight ±1 can be blown down; it was left as it is.');
  return plumbingForm(graph, remarks);
}

function hasCycle(size: number, edges: readonly (readonly [number, number, 1 | -1])[]): boolean {
  const parent = Array.from({ length: size }, (_, i) => i);
  const root = (i: number): number => {
    let at = i;
    while (parent[at] !== at) {
      parent[at] = parent[parent[at]!]!;
      at = parent[at]!;
    }
    return at;
  };
  return edges.some(([i, j]) => {
    const [a, b] = [root(i), root(j)];
    parent[a] = b;
    return a === b;
  });
}
