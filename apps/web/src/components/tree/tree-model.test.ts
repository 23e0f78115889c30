import { describe, expect, it } from 'vitest';
import { begin, redo, step, undo } from './history.ts';
import { addVertex, join, part, removeVertex, rename, setSign, setWeight, tidy, type DrawnTree } from './tree-model.ts';

const EMPTY: DrawnTree = { tree: { vertices: [], edges: [] }, points: {} };
const three = () => addVertex(addVertex(addVertex(EMPTY, null, null), null, 'v1'), null, 'v1');

describe('a drawn tree', () => {
  it('grows by vertices that are joined to the one that is chosen, each at a place of its own', () => {
    const { tree, points } = three();
    expect(tree.vertices).toEqual(['v1', 'v2', 'v3'].map((name) => ({ name, weight: '-2' })));
    expect(tree.edges).toEqual([
      ['v1', 'v2', 1],
      ['v1', 'v3', 1],
    ]);
    expect(new Set(Object.values(points).map(({ x, y }) => `${x} ${y}`)).size).toBe(3);
  });

  it('joins once, parts, and turns signs', () => {
    const joined = join(three(), 'v2', 'v3');
    expect(joined.tree.edges).toHaveLength(3);
    expect(join(joined, 'v3', 'v2')).toBe(joined);
    expect(join(joined, 'v2', 'v2')).toBe(joined);
    expect(setSign(joined, 'v3', 'v2', -1).tree.edges[2]).toEqual(['v2', 'v3', -1]);
    expect(part(joined, 'v3', 'v2').tree.edges).toHaveLength(2);
  });

  it('takes the edges of a vertex away with it, and gives its name again', () => {
    const rest = removeVertex(three(), 'v1');
    expect(rest.tree.edges).toEqual([]);
    expect(Object.keys(rest.points)).toEqual(['v2', 'v3']);
    expect(addVertex(rest, null, null).tree.vertices.at(-1)!.name).toBe('v1');
  });

  it('renames in the edges too, and not to a name that is taken', () => {
    const named = rename(three(), 'v1', 'centre');
    expect(named.tree.edges[0]).toEqual(['centre', 'v2', 1]);
    expect(named.points.centre).toBeDefined();
    expect(rename(named, 'centre', 'v2')).toBe(named);
  });

  it('is placed anew without two at one place', () => {
    const { points } = tidy(three().tree);
    expect(new Set(Object.values(points).map(({ x, y }) => `${x} ${y}`)).size).toBe(3);
    const cycle = tidy(join(three(), 'v2', 'v3').tree);
    expect(new Set(Object.values(cycle.points).map(({ x, y }) => `${x} ${y}`)).size).toBe(3);
  });
});

describe('undo', () => {
  it('goes back and forth, and letters of one weight are one step', () => {
    let history = begin(three());
    for (const weight of ['-', '-1', '-13']) history = step(history, setWeight(history.now, 'v1', weight), 'weight v1');
    history = step(history, setWeight(history.now, 'v2', '-3'), 'weight v2');
    expect(history.past).toHaveLength(2);
    const back = undo(history);
    expect(back.now.tree.vertices.map((v) => v.weight)).toEqual(['-13', '-2', '-2']);
    expect(undo(back).now).toEqual(three());
    expect(undo(undo(back)).now).toEqual(three());
    expect(redo(back).now).toBe(history.now);
    // a new step forgets what was taken back
    expect(redo(step(back, setWeight(back.now, 'v3', '-9'))).now.tree.vertices[2]!.weight).toBe('-9');
  });
});
