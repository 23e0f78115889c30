import { describe, expect, it } from 'vitest';
import { inForest, inTree } from './forest.ts';

describe('parcels of several trees', () => {
  const pieces = [
    { tree: 0, from: [], to: [2, 1] },
    { tree: 0, from: [2, 1], to: null },
    { tree: 1, from: [], to: [0] },
    { tree: 1, from: [0], to: null },
  ];

  it('come back as they were', () => {
    for (const { tree, ...interval } of pieces) expect(inTree(inForest(tree, interval))).toEqual({ tree, ...interval });
  });

  it('abut', () => {
    const cover = pieces.map(({ tree, ...interval }) => inForest(tree, interval));
    cover.slice(1).forEach((piece, i) => expect(piece.from).toEqual(cover[i]!.to));
  });
});
