import { describe, expect, it } from 'vitest';
import type { GraphEdge } from './graph.ts';
import { rootedOrder, vertexOrder } from './order-vertices.ts';

const graph = (size: number, ...pairs: (readonly [number, number])[]) => ({
  size,
  edges: pairs.map(([a, b]): GraphEdge => [a, b, 1]),
});

describe('the order of the vertices', () => {
  it('of a chain is along the chain', () => {
    expect(vertexOrder(graph(4, [0, 1], [1, 2], [2, 3]))).toEqual([0, 1, 2, 3]);
    expect(vertexOrder(graph(3, [0, 1], [0, 2]))).toEqual([1, 0, 2]);
  });

  it('of a star is the longest leg reversed, the centre, the other legs by length', () => {
    // centre 0; legs 1 · 2,3,4 · 5,6
    expect(vertexOrder(graph(7, [0, 1], [0, 2], [2, 3], [3, 4], [0, 5], [5, 6]))).toEqual([4, 3, 2, 0, 1, 5, 6]);
    // of two longest legs the first is reversed
    expect(vertexOrder(graph(6, [0, 1], [1, 2], [0, 3], [3, 4], [0, 5]))).toEqual([2, 1, 0, 5, 3, 4]);
  });

  it('of another tree is depth first, heaviest branch first', () => {
    // two branching vertices 2 and 3 on the path 0-1-2-3-4-5, twigs 6 at 2 and 7 at 3
    const order = vertexOrder(graph(8, [0, 1], [1, 2], [2, 3], [3, 4], [4, 5], [2, 6], [3, 7]));
    expect(order).toEqual([0, 1, 2, 3, 4, 5, 7, 6]);
  });

  it('of a forest goes tree by tree', () => {
    expect(vertexOrder(graph(4, [0, 2], [1, 3]))).toEqual([0, 2, 1, 3]);
  });

  it('of a cycle is as typed', () => {
    expect(vertexOrder(graph(4, [0, 2], [2, 1], [1, 3], [3, 0]))).toEqual([0, 1, 2, 3]);
    expect(rootedOrder(graph(3, [0, 1], [1, 2], [2, 0])).parent).toEqual([null, null, null]);
  });

  it('is a permutation on random trees, each vertex after its parent, also at 2,000 vertices', () => {
    let state = 7;
    const random = (n: number) => (state = (state * 48_271) % 2_147_483_647) % n;
    for (const size of [1, 2, 5, 17, 2_000]) {
      const pairs = Array.from({ length: size - 1 }, (_, i): [number, number] => [random(i + 1), i + 1]);
      const { order, parent } = rootedOrder(graph(size, ...pairs));
      expect([...order].sort((a, b) => a - b)).toEqual(Array.from({ length: size }, (_, i) => i));
      const at = new Map(order.map((v, place) => [v, place]));
      for (const v of order) expect(parent[v] === -1 || at.get(parent[v]!)! < at.get(v)!).toBe(true);
    }
  });
});
