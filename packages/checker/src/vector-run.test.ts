/** Trees of frames and of columns against the tree of rows, in both kinds of integers, cut and interrupted. */
import { describe, expect, it } from 'vitest';
import type { Matrix } from './arithmetic.ts';
import { listColumns } from './dual-columns.ts';
import { dualForm } from './dual-form.ts';
import { openCheckRun, splitCheck, type CheckInterval, type CheckTree } from './tree.ts';
import { VectorTree, type State } from './vector-tree.ts';

function numbers(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state * 1_103_515_245 + 12_345) % 2_147_483_648;
    return Math.floor((state / 2_147_483_648) * below);
  };
}

function productForm(next: (below: number) => number, rank: number, width: number): Matrix {
  for (;;) {
    const b = Array.from({ length: rank }, () => Array.from({ length: width }, () => BigInt(next(5) - 2)));
    const gram = b.map((v) => b.map((w) => v.reduce((sum, x, i) => sum + x * w[i]!, 0n)));
    try {
      if (dualForm(gram).minors.every((d) => BigInt(d) > 0n)) return gram;
    } catch {
      continue; // a division by a minor that is 0: the rows are dependent
    }
  }
}

const treeOf = (method: CheckTree['method'], gram: Matrix, dimension: number | null): CheckTree => ({
  place: '/',
  method,
  dimension,
  gram,
  nodes: 0n,
  orbits: 0n,
});

function orbitsOf(tree: CheckTree): bigint {
  const run = openCheckRun(tree, { from: [], to: null });
  while (run.advance(1_000) === 'more');
  return run.orbits;
}

function leaves(tree: VectorTree): number {
  let found = 0;
  const visit = (state: State): void => {
    if (tree.isLeaf(state)) {
      if (tree.counts(state)) found += 1;
      return;
    }
    const branches = tree.branches(state);
    for (const at of branches.at) visit(tree.child(state, branches, at));
  };
  visit(tree.root());
  return found;
}

const scaled = (gram: Matrix, factor: bigint): Matrix => gram.map((row) => row.map((x) => x * factor));

describe('frames and columns', () => {
  it('count the orbits that rows count, 400 random forms, n = r … r + 3', () => {
    const next = numbers(5);
    for (let k = 0; k < 400; k += 1) {
      const rank = 1 + next(4);
      const excess = next(4);
      const gram = productForm(next, rank, rank + next(2));
      if (gram.some((row, i) => row[i]! > 14n)) continue;
      const rows = orbitsOf(treeOf('rows', gram, rank + excess));
      const columns = orbitsOf(treeOf('columns', gram, rank + excess));
      expect({ gram: gram.map(String), excess, columns }).toEqual({ gram: gram.map(String), excess, columns: rows });
      if (excess > 2) continue;
      const frames = orbitsOf(treeOf('frames', gram, rank + excess));
      expect({ gram: gram.map(String), excess, frames }).toEqual({ gram: gram.map(String), excess, frames: rows });
    }
  });

  it('any n: rows at the trace and columns of any number', () => {
    const next = numbers(6);
    for (let k = 0; k < 60; k += 1) {
      const gram = productForm(next, 1 + next(3), 3);
      const trace = Number(gram.reduce((sum, row, i) => sum + row[i]!, 0n));
      if (trace > 18) continue;
      const columns = orbitsOf(treeOf('columns', gram, null));
      expect({ gram: gram.map(String), columns }).toEqual({
        gram: gram.map(String),
        columns: orbitsOf(treeOf('rows', gram, trace)),
      });
    }
  });

  it('D_4 in Z^4: 3 orbits; E_8 in Z^8: none, in any Z^n: none', () => {
    const cartan = (edges: readonly (readonly [number, number])[], size: number): Matrix =>
      Array.from({ length: size }, (_, i) =>
        Array.from({ length: size }, (_, j) =>
          i === j ? 2n : edges.some(([a, b]) => (a === i && b === j) || (a === j && b === i)) ? -1n : 0n,
        ),
      );
    const d4 = cartan(
      [
        [0, 1],
        [0, 2],
        [0, 3],
      ],
      4,
    );
    const e8 = cartan(
      [
        [0, 1],
        [1, 2],
        [2, 3],
        [3, 4],
        [4, 5],
        [5, 6],
        [4, 7],
      ],
      8,
    );
    expect([orbitsOf(treeOf('frames', d4, 4)), orbitsOf(treeOf('columns', d4, null))]).toEqual([3n, 3n]);
    expect([orbitsOf(treeOf('frames', e8, 8)), orbitsOf(treeOf('columns', e8, null))]).toEqual([0n, 0n]);
    // √2·E8: 2,025 orbits, 30·|W(E8)| embeddings in all (Conway–Sloane, Sphere Packings, Lattices and Groups)
    expect(orbitsOf(treeOf('frames', scaled(e8, 2n), 8))).toBe(2025n);
  });

  it('in bigints as in doubles', () => {
    const next = numbers(8);
    for (let k = 0; k < 120; k += 1) {
      const rank = 1 + next(4);
      const excess = next(3);
      const gram = productForm(next, rank, rank + excess);
      const [doubles, bigints] = [dualForm(gram), dualForm(gram, 0n)];
      expect([typeof doubles.determinant, typeof bigints.determinant]).toEqual(['number', 'bigint']);
      const wanted = excess === 0 ? 'unit' : excess === 1 ? 'square' : 'all';
      const [one, other] = [doubles, bigints].map((form) => {
        const columns = listColumns(form, wanted);
        return { vectors: columns.admissible, orbits: leaves(new VectorTree(form, columns, rank + excess)) };
      });
      expect({ gram: gram.map(String), excess, ...other }).toEqual({ gram: gram.map(String), excess, ...one });
    }
  });

  it('cut and interrupted they count the same', () => {
    const next = numbers(7);
    for (const [method, excess] of [
      ['frames', 0],
      ['frames', 1],
      ['frames', 2],
      ['columns', 3],
    ] as const) {
      const gram = productForm(next, 4, 4 + excess);
      const tree = treeOf(method, gram, 4 + excess);
      const whole = orbitsOf(tree);
      let [orbits, vectors] = [0n, 0n];
      const pieces: CheckInterval[] = splitCheck(tree, 5);
      pieces.slice(1).forEach((p, i) => expect(p.from).toEqual(pieces[i]!.to));
      for (const piece of pieces) {
        let checkpoint: string | undefined;
        for (;;) {
          const run = openCheckRun(tree, piece, checkpoint);
          const end = run.advance(1 + next(5));
          if (end === 'done') {
            orbits += run.orbits;
            vectors += run.nodes;
            break;
          }
          checkpoint = run.checkpoint();
        }
      }
      expect(orbits).toBe(whole);
      expect(vectors).toBe(BigInt(listColumns(dualForm(gram), excess === 0 ? 'unit' : 'all').admissible));
    }
  });
});
