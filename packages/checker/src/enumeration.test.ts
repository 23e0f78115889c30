/** The enumeration against itself (two ways to list children, two kinds of integers, cut and interrupted) and against brute force. */
import { describe, expect, it } from 'vitest';
import { determinantOf } from './arithmetic.ts';
import { exactStep } from './exact-step.ts';
import { BIGINTS, DOUBLES, type Kind } from './int-kinds.ts';
import { sparseChild, type SparseNode } from './sparse-columns.ts';
import { SparseListing } from './sparse-listing.ts';
import { END } from './steps.ts';
import { openCheckRun, splitCheck, type CheckInterval, type CheckRowsTree } from './tree.ts';

function numbers(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state * 1_103_515_245 + 12_345) % 2_147_483_648;
    return Math.floor((state / 2_147_483_648) * below);
  };
}

function treeOf(gram: readonly (readonly (number | bigint)[])[], dimension: number): CheckRowsTree {
  return { place: '/', method: 'rows', dimension, gram: gram.map((row) => row.map(BigInt)), nodes: 0n, orbits: 0n };
}

function wholeOf(tree: CheckRowsTree): { nodes: bigint; orbits: bigint } {
  const run = openCheckRun(tree, { from: [], to: null });
  while (run.advance(1_000) === 'more');
  return { nodes: run.nodes, orbits: run.orbits };
}

/** Counts with `SparseListing` alone. */
function sparseOf(tree: CheckRowsTree, kind: Kind): { nodes: bigint; orbits: bigint } {
  const { gram } = tree;
  const count = { nodes: 0n, orbits: 0n };
  const visit = (node: SparseNode, depth: number) => {
    count.nodes += 1n;
    if (depth === gram.length) {
      count.orbits += 1n;
      return;
    }
    const listing = new SparseListing(
      kind,
      kind.fromBig(gram[depth]![depth]!),
      gram[depth]!.slice(0, depth).map(kind.fromBig),
      gram.slice(0, depth).map((row, i) => kind.fromBig(row[i]!)),
    );
    listing.open(node);
    while (listing.next({ left: Infinity }) !== END) visit(sparseChild(node, depth, listing.filling), depth + 1);
  };
  visit({ columns: [], zeros: tree.dimension }, 0);
  return count;
}

/** All vectors of Z^n of a norm. */
function vectorsOf(n: number, norm: number): number[][] {
  if (n === 0) return norm === 0 ? [[]] : [];
  const out: number[][] = [];
  const root = Math.floor(Math.sqrt(norm));
  for (let x = -root; x <= root; x += 1) for (const rest of vectorsOf(n - 1, norm - x * x)) out.push([x, ...rest]);
  return out;
}

/** All matrices row by row; nodes are told apart by their columns up to sign and order. */
function bruteOf(gram: readonly (readonly number[])[], n: number): { nodes: bigint; orbits: bigint } {
  let level: number[][][] = [[]];
  let nodes = 1n;
  for (const [k, weights] of gram.entries()) {
    const next = new Map<string, number[][]>();
    for (const rows of level)
      for (const x of vectorsOf(n, weights[k]!)) {
        if (rows.some((row, i) => row.reduce((sum, y, j) => sum + y * x[j]!, 0) !== weights[i])) continue;
        const all = [...rows, x];
        const columns = x.map((_, j) => {
          const column = all.map((row) => row[j]!);
          const lead = column.find((y) => y !== 0) ?? 1;
          return column.map((y) => (lead < 0 ? -y : y) + 0).join();
        });
        next.set(columns.sort().join(';'), all);
      }
    level = [...next.values()];
    nodes += BigInt(level.length);
  }
  return { nodes, orbits: BigInt(level.length) };
}

/** A Gram matrix of independent rows, smaller norms first. */
function randomGram(next: (below: number) => number, rank: number, width: number, size: number): number[][] {
  for (;;) {
    const rows = Array.from({ length: rank }, () => Array.from({ length: width }, () => next(2 * size + 1) - size));
    const gram = rows.map((x) => rows.map((y) => x.reduce((sum, v, i) => sum + v * y[i]!, 0)));
    const order = [...gram.keys()].sort((a, b) => gram[a]![a]! - gram[b]![b]!);
    if (isDefinite(gram)) return order.map((i) => order.map((j) => gram[i]![j]!));
  }
}

function isDefinite(gram: readonly (readonly number[])[]): boolean {
  const m = gram.map((row) => row.map(BigInt));
  let last = 1n;
  for (let k = 0; k < m.length; k += 1) {
    if (m[k]![k]! <= 0n) return false;
    for (let i = k + 1; i < m.length; i += 1)
      for (let j = k + 1; j < m.length; j += 1) m[i]![j] = (m[i]![j]! * m[k]![k]! - m[i]![k]! * m[k]![j]!) / last;
    last = m[k]![k]!;
  }
  return true;
}

describe('rows chosen at each node', () => {
  it('the same orbits as in a fixed order, in pieces and interrupted, 150 random forms', () => {
    const next = numbers(77);
    for (let k = 0; k < 150; k += 1) {
      const rank = 2 + next(3);
      const b = Array.from({ length: rank }, () => Array.from({ length: rank + next(2) }, () => next(5) - 2));
      const gram = b.map((v) => b.map((w) => v.reduce((sum, x, i) => sum + x * (w[i] ?? 0), 0)));
      if (determinantOf(gram.map((row) => row.map(BigInt))) === 0n) continue;
      const tree = treeOf(gram, rank + next(3));
      const chosen: CheckRowsTree = { ...tree, chosen: true };
      const whole = wholeOf(chosen);
      expect({ gram, orbits: whole.orbits }).toEqual({ gram, orbits: wholeOf(tree).orbits });
      const parts = { nodes: 0n, orbits: 0n };
      for (const piece of splitCheck(chosen, 4)) {
        let run = openCheckRun(chosen, piece);
        while (run.advance(1 + next(4)) === 'more') run = openCheckRun(chosen, piece, run.checkpoint());
        parts.nodes += run.nodes;
        parts.orbits += run.orbits;
      }
      expect({ gram, ...parts }).toEqual({ gram, ...whole });
    }
  });
});

describe('against other ways to count', () => {
  it('brute force over matrices, small random lattices', () => {
    const next = numbers(1);
    for (let round = 0; round < 150; round += 1) {
      const rank = 1 + next(3);
      const n = rank + next(3);
      const gram = randomGram(next, rank, Math.max(rank, n - next(2)), 1 + next(2));
      if (Math.max(...gram.map((row, i) => row[i]!)) > 10) continue;
      expect({ gram, n, ...wholeOf(treeOf(gram, n)) }).toEqual({ gram, n, ...bruteOf(gram, n) });
    }
  });

  it('listing by projection, sparse listing in doubles, sparse listing in bigint', () => {
    const next = numbers(2);
    for (let round = 0; round < 60; round += 1) {
      const rank = 2 + next(5);
      const gram = randomGram(next, rank, rank + next(3), 1 + next(2));
      const tree = treeOf(gram, rank + next(3));
      const whole = wholeOf(tree);
      expect({ gram, n: tree.dimension, ...whole }).toEqual({ gram, n: tree.dimension, ...sparseOf(tree, DOUBLES) });
      if (whole.nodes < 500n)
        expect({ gram, n: tree.dimension, ...whole }).toEqual({ gram, n: tree.dimension, ...sparseOf(tree, BIGINTS) });
    }
  });

  it('steps in bigint where products pass 2^53', () => {
    const next = numbers(3);
    for (const [n, size] of [
      [2, 3_000],
      [3, 60],
    ] as const) {
      for (let round = 0; round < 8; round += 1) {
        const rows = Array.from({ length: 2 }, () => Array.from({ length: n }, () => next(2 * size + 1) - size));
        const tree = treeOf(
          rows.map((x) => rows.map((y) => x.reduce((sum, v, i) => sum + v * y[i]!, 0))),
          n,
        );
        expect({ rows, ...wholeOf(tree) }).toEqual({ rows, ...sparseOf(tree, n === 2 ? BIGINTS : DOUBLES) });
      }
    }
  });

  it('exactStep is exact on both sides of 2^53', () => {
    const next = numbers(7);
    for (let round = 0; round < 2_000; round += 1) {
      const digits = 1 + next(25);
      const some = () => next(2 ** digits) - next(2 ** digits);
      const [e, q, c, d, a] = [1 + next(2 ** digits), some(), some(), some(), 1 + next(50)];
      // choose b so that a·b − c·d is a multiple of e: with a = e, any b and d a multiple of e do
      const value = (BigInt(e) * BigInt(a) * BigInt(q) - BigInt(c) * BigInt(d) * BigInt(e)) / BigInt(e);
      if (value > 2n ** 52n || value < -(2n ** 52n)) continue;
      expect(BigInt(exactStep(e * a, q, c, d * e, e))).toBe(value);
    }
  });
});

describe('shapes that could hang or overflow', () => {
  it('⟨2^31⟩ in Z^4', () => {
    // all entries are even down to ⟨2⟩ = 1 + 1, so there is one way
    expect(wholeOf(treeOf([[2 ** 31]], 4))).toEqual({ nodes: 2n, orbits: 1n });
  });

  it('a norm beyond doubles in Z^1', () => {
    const a = 10n ** 40n + 7n;
    expect(wholeOf(treeOf([[a * a]], 1))).toEqual({ nodes: 2n, orbits: 1n });
    expect(wholeOf(treeOf([[a * a + 1n]], 1))).toEqual({ nodes: 1n, orbits: 0n });
  });

  it('a million columns', () => {
    expect(wholeOf(treeOf([[5]], 1_000_000)).orbits).toBe(2n);
    expect(
      wholeOf(
        treeOf(
          [
            [2, -1],
            [-1, 2],
          ],
          1_000_000,
        ),
      ),
    ).toEqual({ nodes: 3n, orbits: 1n });
  });

  it('one row with a thousand ones', () => {
    // 4-squares and fewer of 1000 would be many; width 1000 needs all ones
    const run = openCheckRun(treeOf([[1_000]], 1_000), { from: [], to: null });
    expect(run.advance(50)).toBe('more');
  });

  it('a chain of 2,000 twos', () => {
    const r = 2_000;
    const gram = Array.from({ length: r }, (_, i) =>
      Array.from({ length: r }, (_, j) => (i === j ? 2n : Math.abs(i - j) === 1 ? -1n : 0n)),
    );
    const whole = wholeOf({ place: '/', method: 'rows', dimension: r + 1, gram, nodes: 0n, orbits: 0n });
    // A_3 in Z^n, n ≥ 4, has a second orbit (two columns used twice), which A_4 does not continue
    expect(whole).toEqual({ nodes: BigInt(r) + 2n, orbits: 1n });
  });

  it('rank 0 is its root', () => {
    expect(wholeOf(treeOf([], 7))).toEqual({ nodes: 1n, orbits: 1n });
  });
});

describe('cut and interrupted', () => {
  const runThrough = (tree: CheckRowsTree, interval: CheckInterval, slices: () => number) => {
    let run = openCheckRun(tree, interval);
    while (run.advance(slices()) === 'more') {
      const checkpoint = run.checkpoint();
      run = openCheckRun(tree, interval, checkpoint);
      expect(run.checkpoint()).toBe(checkpoint);
    }
    return run;
  };

  it('at random, the counts are those of the whole', () => {
    const next = numbers(4);
    for (let round = 0; round < 25; round += 1) {
      const rank = 2 + next(4);
      const gram = randomGram(next, rank, rank + 1 + next(2), 1 + next(2));
      const tree = treeOf(gram, rank + next(4));
      const whole = wholeOf(tree);
      if (whole.nodes > 3_000n) continue;
      for (const pieces of [1, 2, 7, 30]) {
        let [nodes, orbits] = [0n, 0n];
        for (const interval of splitCheck(tree, pieces)) {
          const run = runThrough(tree, interval, () => [0.01, 0.1, 1, 3, 20][next(5)]!);
          nodes += run.nodes;
          orbits += run.orbits;
        }
        expect({ gram, n: tree.dimension, pieces, nodes, orbits }).toEqual({
          gram,
          n: tree.dimension,
          pieces,
          ...whole,
        });
      }
    }
  });

  it('at every single step; inside wide nodes', () => {
    const chain = (a: readonly number[]) =>
      a.map((x, i) => a.map((_, j) => (i === j ? x : Math.abs(i - j) === 1 ? -1 : 0)));
    const wide = chain([...new Array<number>(70).fill(2), 3, 3, 2]);
    const small = treeOf(chain([3, 3, 3, 3]), 8);
    const steps = runThrough(small, { from: [], to: null }, () => 1 / 1_000);
    expect({ nodes: steps.nodes, orbits: steps.orbits }).toEqual(wholeOf(small));
    const large = treeOf(wide, 78);
    const next = numbers(6);
    const slices = runThrough(large, { from: [], to: null }, () => 1 + next(40));
    expect({ nodes: slices.nodes, orbits: slices.orbits }).toEqual(wholeOf(large));
  });

  it('a finished run stays finished, a new one begins', () => {
    const tree = treeOf([[3]], 3);
    const run = openCheckRun(tree, { from: [], to: null });
    const fresh = openCheckRun(tree, { from: [], to: null }, run.checkpoint());
    while (run.advance(1) === 'more');
    while (fresh.advance(1) === 'more');
    const again = openCheckRun(tree, { from: [], to: null }, run.checkpoint());
    expect([again.advance(1), again.nodes, fresh.nodes]).toEqual(['done', 2n, 2n]);
  });
});
