import { describe, expect, it } from 'vitest';
import { neighbourhood } from './neighbourhood.ts';

describe('a vertex with its neighbours', () => {
  it('keeps the numbers of its columns, the weights and the edges', () => {
    const size = 90;
    const { input, sentence } = neighbourhood(
      {
        matrix: Array.from({ length: size }, (_, i) =>
          Array.from({ length: size + 1 }, (_, j) => (j === i ? 1 : j === i + 1 ? -1 : 0)),
        ),
        names: Array.from({ length: size }, (_, i) => `v${i + 1}`),
        weights: Array.from({ length: size }, (_, i) => String(-2 - i)),
        edges: Array.from({ length: size - 1 }, (_, i) => [i, i + 1, 1]),
      },
      40,
    );
    expect(input.names).toEqual(['v40', 'v41', 'v42']);
    expect(input.columnNumbers).toEqual([40, 41, 42, 43]);
    expect(input.weights).toEqual(['-41', '-42', '-43']);
    expect(input.edges).toEqual([
      [0, 1, 1],
      [1, 2, 1],
    ]);
    expect(sentence).toContain('4 wires');
  });

  it('of a centre with very many legs says how many are left out', () => {
    const { input, sentence } = neighbourhood(
      {
        matrix: Array.from({ length: 31 }, () => [1]),
        names: Array.from({ length: 31 }, (_, i) => `v${i}`),
        weights: new Array<string>(31).fill('1'),
        edges: Array.from({ length: 30 }, (_, i) => [0, i + 1, 1]),
      },
      0,
    );
    expect(input.names).toHaveLength(12);
    expect(sentence).toContain('19 further neighbours');
  });
});
