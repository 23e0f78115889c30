/** Plumbing graphs and their forms: Q_vv = weight, Q_vw = sign of the edge. */
import { zeroMatrix } from '@palmette/exact';
import type { BuiltForm, Plumbing } from './source.ts';

export function plumbingForm(
  graph: Plumbing,
  remarks: readonly string[],
  orientation?: 'entered' | 'reversed',
): BuiltForm {
  const size = graph.vertices.length;
  const form = zeroMatrix(size, size);
  graph.vertices.forEach((v, i) => (form[i]![i] = v.weight));
  for (const [i, j, sign] of graph.edges) {
    form[i]![j] = BigInt(sign);
    form[j]![i] = BigInt(sign);
  }
  return {
    form,
    names: graph.vertices.map((v) => v.name),
    graph,
    remarks,
    ...(orientation === undefined ? {} : { orientation }),
  };
}

/** A chain with the given weights, joined in order. */
export function chainGraph(weights: readonly bigint[]): Plumbing {
  return {
    vertices: weights.map((weight, i) => ({ name: `v${i + 1}`, weight })),
    edges: weights.slice(1).map((_, i) => [i, i + 1, 1] as const),
  };
}

/** A star: centre first, then leg after leg, each outward. */
export function starGraph(centre: bigint, legs: readonly (readonly bigint[])[]): Plumbing {
  const vertices = [{ name: 'c', weight: centre }];
  const edges: [number, number, 1][] = [];
  legs.forEach((leg, k) =>
    leg.forEach((weight, i) => {
      edges.push([i === 0 ? 0 : vertices.length - 1, vertices.length, 1]);
      vertices.push({ name: `${k + 1}.${i + 1}`, weight });
    }),
  );
  return { vertices, edges };
}
