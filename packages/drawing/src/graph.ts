/** Graphs as the drawings take them: vertices by number, edges with the integer that joins them. */

/** Two vertices and the entry of the form between them (±1 for a plumbing). */
export type GraphEdge = readonly [number, number, number];

export interface Graph {
  readonly size: number;
  readonly edges: readonly GraphEdge[];
}

export type Neighbours = readonly (readonly number[])[];

/** For each vertex the vertices that an edge joins to it, in the order of the edges. */
export function neighboursOf(graph: Graph): Neighbours {
  const list: number[][] = Array.from({ length: graph.size }, () => []);
  for (const [a, b] of graph.edges) {
    list[a]!.push(b);
    if (a !== b) list[b]!.push(a);
  }
  return list;
}

/** Connected components, each ascending, in the order of their first vertices. */
export function componentsOf(neighbours: Neighbours): number[][] {
  const seen = new Uint8Array(neighbours.length);
  const components: number[][] = [];
  for (let start = 0; start < neighbours.length; start += 1) {
    if (seen[start] === 1) continue;
    const component = [start];
    seen[start] = 1;
    for (let at = 0; at < component.length; at += 1) {
      for (const next of neighbours[component[at]!]!) {
        if (seen[next] === 1) continue;
        seen[next] = 1;
        component.push(next);
      }
    }
    components.push(component.sort((a, b) => a - b));
  }
  return components;
}

/** True if a component without doubled edges has one edge less than vertices. */
export function isTree(component: readonly number[], neighbours: Neighbours): boolean {
  const ends = component.reduce((sum, v) => sum + neighbours[v]!.length, 0);
  return ends === 2 * (component.length - 1);
}
