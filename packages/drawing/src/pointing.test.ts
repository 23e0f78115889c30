import { describe, expect, it } from 'vitest';
import { afterClick, afterHover, afterKey, AT_REST, type Pointer } from './moving.ts';
import { litMark, productMarks, readAim } from './pointing.ts';
import { layTrellis, type TrellisInput } from './trellis.ts';

/** 17/5 = [4, 2, 3] in Z^5, as on the sheet. */
const CHAIN: TrellisInput = {
  matrix: [
    [1, 1, 1, 1, 0],
    [-1, 0, 0, 0, 1],
    [0, -1, 1, 0, -1],
  ],
  names: ['v1', 'v2', 'v3'],
  weights: [-4, -2, -3],
  edges: [
    [0, 1, 1],
    [1, 2, 1],
  ],
};
const trellis = layTrellis(CHAIN, { products: true });

describe('pointing', () => {
  it('at a wire names its vertices and entries', () => {
    const reading = readAim(trellis, { kind: 'wire', wire: 1 });
    expect(reading.caption).toBe('e_2 meets v1 and v3: +1, −1.');
    expect([...reading.vertices]).toEqual([0, 2]);
    expect(productMarks(trellis, reading)).toEqual([]);
  });

  it('at an edge multiplies on the wires that both use', () => {
    const reading = readAim(trellis, { kind: 'edge', edge: 0 });
    expect(reading.caption).toBe('v1 and v2 meet on e_1: their product is −1.');
    expect(reading.sum).toBe(-1n);
    expect([...reading.wires]).toEqual([0]);
    expect(productMarks(trellis, reading).filter((m) => m.kind === 'text')).toHaveLength(2);
  });

  it('at two vertices without an edge adds up to 0', () => {
    const reading = readAim(trellis, { kind: 'pair', vertices: [0, 2] });
    expect(reading.caption).toBe('v1 and v3, without an edge, meet on e_2 and e_3: their product is −1 + 1 = 0.');
    expect(reading.edge).toBe(-1);
  });

  it('at a vertex adds the squares up', () => {
    expect(readAim(trellis, { kind: 'vertex', vertex: 2 }).caption).toBe(
      'v3, weight −3: the squares on e_2, e_3 and e_5 are 1 + 1 + 1 = 3.',
    );
  });

  it('counts a bundle as often as it hangs', () => {
    const bundled = layTrellis({
      matrix: [
        [1, 1, 1, 1, 1, 0],
        [0, 0, 0, 0, -1, 1],
      ],
      names: ['a', 'b'],
      weights: [5, 2],
      edges: [],
    });
    const reading = readAim(bundled, { kind: 'vertex', vertex: 0 });
    expect(reading.caption).toBe('a, weight 5: the squares on e_1 and e_{2…5} are 1 + 4 = 5.');
    expect(readAim(bundled, { kind: 'wire', wire: 1 }).caption).toBe('e_{2…5} meet a: +1.');
  });

  it('lights what belongs to it, and the other leaves step back', () => {
    const reading = readAim(trellis, { kind: 'edge', edge: 0 });
    const lit = trellis.marks.map((mark) => litMark(mark, reading));
    const colours = (role: string) =>
      lit
        .filter((m) => m.part.role === role)
        .map((m) => (m.kind === 'text' ? m.fill : m.kind === 'line' ? m.stroke : (m.stroke ?? m.fill)));
    expect(colours('leaf')).toEqual(['damson', 'damson', 'edge', 'edge', 'edge', 'edge', 'edge', 'edge', 'edge']);
    expect(colours('dot')).toEqual(['damson', 'damson', 'ink']);
    expect(colours('edge')).toEqual(['damson', 'ink']);
    expect(colours('wire')).toEqual(['damson', 'wire', 'wire', 'wire', 'wire']);
    expect(colours('stem')).toEqual(['ink', 'ink', 'ink']);
    // nothing moves
    const place = (m: object) =>
      JSON.stringify(m, (key, value: unknown) => (['fill', 'stroke', 'width', 'weight'].includes(key) ? 0 : value));
    expect(lit.map(place)).toEqual(trellis.marks.map(place));
  });
});

describe('going about by keys', () => {
  const go = (...keys: string[]): Pointer =>
    keys.reduce<Pointer>((at, key) => afterKey(trellis, at, key) ?? at, AT_REST);

  it('walks along the vertices and stops at the ends', () => {
    expect(go('ArrowRight').aim).toEqual({ kind: 'vertex', vertex: 0 });
    expect(go('ArrowRight', 'ArrowRight', 'ArrowRight', 'ArrowRight').aim).toEqual({ kind: 'vertex', vertex: 2 });
    expect(go('ArrowLeft').aim).toEqual({ kind: 'vertex', vertex: 2 });
    expect(go('ArrowRight', 'End').aim).toEqual({ kind: 'vertex', vertex: 2 });
  });

  it('walks along the wires', () => {
    expect(go('ArrowDown', 'ArrowDown').aim).toEqual({ kind: 'wire', wire: 1 });
    expect(go('ArrowUp').aim).toEqual({ kind: 'wire', wire: 4 });
    expect(go('ArrowDown', 'End', 'ArrowDown').aim).toEqual({ kind: 'wire', wire: 4 });
    expect(go('ArrowUp', 'Home').aim).toEqual({ kind: 'wire', wire: 0 });
    expect(go('ArrowDown', 'ArrowDown', 'ArrowRight').aim).toEqual({ kind: 'vertex', vertex: 1 });
  });

  it('takes the edges of a vertex in turn', () => {
    const middle = ['ArrowRight', 'ArrowRight', 'e'];
    expect(go(...middle).aim).toMatchObject({ kind: 'edge', edge: 0 });
    expect(go(...middle, 'e').aim).toMatchObject({ kind: 'edge', edge: 1 });
    expect(go(...middle, 'e', 'e').aim).toMatchObject({ kind: 'edge', edge: 0 });
    expect(go(...middle, 'ArrowRight').aim).toEqual({ kind: 'vertex', vertex: 2 });
    expect(go('ArrowRight', 'e', 'e').aim).toMatchObject({ kind: 'edge', edge: 0 });
  });

  it('keeps on Enter, makes a pair of the kept vertex and the next, lets go on Esc', () => {
    expect(go('ArrowRight', 'Enter', 'ArrowRight').aim).toMatchObject({ kind: 'edge', edge: 0 });
    expect(go('ArrowRight', 'Enter', 'ArrowRight', 'ArrowRight').aim).toEqual({ kind: 'pair', vertices: [0, 2] });
    expect(go('ArrowRight', 'Enter', 'ArrowRight', 'Escape')).toEqual(AT_REST);
    expect(afterKey(trellis, AT_REST, 'Escape')).toBeNull();
    expect(afterKey(trellis, AT_REST, 'x')).toBeNull();
  });

  it('keeps what is clicked when the mouse goes away, and lets go at the second click', () => {
    const clicked = afterClick(trellis, AT_REST, { kind: 'wire', wire: 2 });
    expect(afterHover(trellis, clicked, null).aim).toEqual({ kind: 'wire', wire: 2 });
    expect(afterClick(trellis, clicked, { kind: 'wire', wire: 2 })).toEqual(AT_REST);
    const vertex = afterClick(trellis, AT_REST, { kind: 'vertex', vertex: 0 });
    expect(afterHover(trellis, vertex, { kind: 'vertex', vertex: 2 }).aim).toEqual({ kind: 'pair', vertices: [0, 2] });
  });
});
