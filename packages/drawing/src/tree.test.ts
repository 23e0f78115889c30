import { describe, expect, it } from 'vitest';
import type { GraphEdge } from './graph.ts';
import { textWidth } from './numerals.ts';
import { layTree, type TreePicture } from './tree.ts';
import { placeGraph } from './tree-places.ts';

const joined = (...pairs: (readonly [number, number])[]) => pairs.map(([a, b]): GraphEdge => [a, b, 1]);
/** P(3, 5, −7): centre, legs [2,2], [2,2,2,2], [7]. */
const PRETZEL = {
  weights: [-2, -2, -2, -2, -2, -2, -2, -7],
  edges: joined([0, 1], [1, 2], [0, 3], [3, 4], [4, 5], [5, 6], [0, 7]),
};
const chainEdges = (n: number) => joined(...Array.from({ length: n - 1 }, (_, i): [number, number] => [i, i + 1]));

/** Pairs of straight edges that cross away from their ends. */
function crossings(picture: TreePicture): number {
  const lines = picture.marks.filter((m) => m.kind === 'line');
  let count = 0;
  lines.forEach((a, i) =>
    lines.slice(i + 1).forEach((b) => {
      const side = (l: typeof a, x: number, y: number) =>
        Math.sign((l.x2 - l.x1) * (y - l.y1) - (l.y2 - l.y1) * (x - l.x1));
      if (side(a, b.x1, b.y1) * side(a, b.x2, b.y2) < 0 && side(b, a.x1, a.y1) * side(b, a.x2, a.y2) < 0) count += 1;
    }),
  );
  return count;
}

function touching(picture: TreePicture): number {
  const boxes = picture.marks.flatMap((m) => {
    if (m.kind === 'round') return [{ x1: m.x - m.radius, x2: m.x + m.radius, y1: m.y - m.radius, y2: m.y + m.radius }];
    if (m.kind !== 'text') return [];
    const w = textWidth(m.runs, m.size);
    const x1 = m.anchor === 'middle' ? m.x - w / 2 : m.anchor === 'end' ? m.x - w : m.x;
    return [{ x1, x2: x1 + w, y1: m.y - 0.72 * m.size, y2: m.y }];
  });
  let count = 0;
  boxes.forEach((a, i) =>
    boxes.slice(i + 1).forEach((b) => {
      if (Math.min(a.x2, b.x2) > Math.max(a.x1, b.x1) && Math.min(a.y2, b.y2) > Math.max(a.y1, b.y1)) count += 1;
    }),
  );
  return count;
}

describe('the tree', () => {
  it('of a star has its longest leg and the shortest one on one line, the others below', () => {
    const places = placeGraph({ size: 8, edges: PRETZEL.edges })!;
    const at = new Map(places.vertices.map((v) => [v.vertex, [v.column, v.row]]));
    expect([6, 5, 4, 3, 0, 7].map((v) => at.get(v))).toEqual([0, 1, 2, 3, 4, 5].map((c) => [c, 0]));
    expect([1, 2].map((v) => at.get(v))).toEqual([
      [5, 1],
      [6, 1],
    ]);
    const picture = layTree(PRETZEL)!;
    expect(touching(picture)).toBe(0);
    expect(picture.marks.filter((m) => m.kind === 'text' && m.part.role === 'weight')).toHaveLength(8);
  });

  it('crosses nothing and stands on nothing, on random trees', () => {
    let state = 11;
    const random = (n: number) => (state = (state * 48_271) % 2_147_483_647) % n;
    for (let round = 0; round < 60; round += 1) {
      const size = 2 + random(22);
      const edges = joined(...Array.from({ length: size - 1 }, (_, i): [number, number] => [random(i + 1), i + 1]));
      const picture = layTree({ weights: Array.from({ length: size }, () => -1 - random(12)), edges })!;
      const cells = picture.vertices.map(({ x, y }) => `${x} ${y}`);
      expect(new Set(cells).size, JSON.stringify(edges)).toBe(picture.vertices.length);
      expect(crossings(picture), JSON.stringify(edges)).toBe(0);
      expect(touching(picture), JSON.stringify(edges)).toBe(0);
    }
  });

  it('folds long runs of equal vertices to their ends', () => {
    const weights = [-13, ...new Array<number>(40).fill(-2), -5];
    const picture = layTree({ weights, edges: chainEdges(42) })!;
    expect(picture.vertices.map((v) => v.vertex)).toEqual([0, 1, 40, 41]);
    const words = picture.marks.flatMap((m) => (m.kind === 'text' ? [m.runs[0]!.text] : []));
    expect(words).toContain('40 ×');
    expect(picture.width).toBeLessThan(340);
    // an edge of sign −1 is never hidden in a fold
    const signed = chainEdges(42).map((e, i): GraphEdge => (i === 20 ? [e[0], e[1], -1] : e));
    const kept = layTree({ weights, edges: signed })!;
    expect(kept.vertices.map((v) => v.vertex)).toEqual([0, 1, 20, 21, 40, 41]);
    expect(kept.marks.filter((m) => m.kind === 'line' && m.part.edge === 20)).toHaveLength(1);
  });

  it('of 2,000 vertices in a chain is laid without recursion', () => {
    const weights = Array.from({ length: 2_000 }, (_, i) => -2 - (i % 3));
    expect(layTree({ weights, edges: chainEdges(2_000) })).toBeNull();
    expect(layTree({ weights: new Array<number>(2_000).fill(-2), edges: chainEdges(2_000) })!.vertices).toHaveLength(2);
  });

  it('is small without words for a table', () => {
    const small = layTree(PRETZEL, { size: 'small' })!;
    expect(small.marks.every((m) => m.kind !== 'text')).toBe(true);
    expect(small.width).toBeLessThan(100);
    expect(small.height).toBeLessThan(30);
  });

  it('sets the components of a sum one below the other', () => {
    const picture = layTree({ weights: [-2, -2, -3], edges: joined([0, 1]) })!;
    const [a, b, c] = picture.vertices;
    expect(a!.y).toBe(b!.y);
    expect(c!.y).toBeGreaterThan(a!.y);
    expect(layTree({ weights: [], edges: [] })!.marks).toEqual([]);
  });

  it('of a matrix shows the entry of an edge that is not ±1, on a circle where there is a cycle', () => {
    const picture = layTree({
      weights: [4, 4, 4],
      edges: [
        [0, 1, 2],
        [1, 2, -1],
        [0, 2, 1],
      ],
    })!;
    const words = picture.marks.flatMap((m) => (m.kind === 'text' && m.part.role === 'edge' ? [m.runs[0]!.text] : []));
    expect(words).toEqual(['2']);
    expect(picture.marks.filter((m) => m.kind === 'line' && m.dash !== undefined)).toHaveLength(1);
    const all = Array.from({ length: 30 }, (_, i): GraphEdge => [i, (i + 1) % 30, 1]);
    expect(layTree({ weights: new Array<number>(30).fill(3), edges: all })).toBeNull();
  });
});
