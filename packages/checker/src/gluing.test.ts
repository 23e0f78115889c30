/** Frames by gluing against frames from the list of columns; roots and primes against plain search. */
import { describe, expect, it } from 'vitest';
import { determinantOf, type Matrix } from './arithmetic.ts';
import { openCheckRun, splitCheck, type CheckTree } from './tree.ts';
import { isPrime, rootsOfUnit } from './unit-roots.ts';

function numbers(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state * 1_103_515_245 + 12_345) % 2_147_483_648;
    return Math.floor((state / 2_147_483_648) * below);
  };
}

function primesOf(n: bigint): bigint[] {
  const out: bigint[] = [];
  for (let p = 2n, rest = n; rest > 1n; p += 1n) {
    if (rest % p === 0n) out.push(p);
    while (rest % p === 0n) rest /= p;
  }
  return out;
}

function counted(tree: CheckTree): { nodes: bigint; orbits: bigint } {
  let [nodes, orbits] = [0n, 0n];
  for (const piece of splitCheck(tree, 3)) {
    let run = openCheckRun(tree, piece);
    while (run.advance(1) === 'more') run = openCheckRun(tree, piece, run.checkpoint());
    nodes += run.nodes;
    orbits += run.orbits;
  }
  return { nodes, orbits };
}

describe('gluing', () => {
  it('counts the orbits that the list of columns gives, 300 random forms, n = r and r + 1', () => {
    const next = numbers(9);
    for (let done = 0; done < 300;) {
      const rank = 1 + next(4);
      const excess = next(2);
      const width = rank + next(3);
      const b = Array.from({ length: rank }, () => Array.from({ length: width }, () => BigInt(next(5) - 2)));
      const gram: Matrix = b.map((v) => b.map((w) => v.reduce((sum, x, i) => sum + x * w[i]!, 0n)));
      const d = determinantOf(gram);
      if (d === 0n || d > 4_000n) continue;
      const tree: CheckTree = { place: '/', method: 'frames', dimension: rank + excess, gram, nodes: 0n, orbits: 0n };
      const glued = counted({ ...tree, primes: primesOf(d) });
      expect({ gram: gram.map(String), excess, orbits: glued.orbits }).toEqual({
        gram: gram.map(String),
        excess,
        orbits: counted(tree).orbits,
      });
      done += 1;
    }
  });

  it('√2·E8 in Z^8: 2,025 of 3·5·9·17 unimodular overlattices', () => {
    const edges = [
      [0, 1],
      [1, 2],
      [2, 3],
      [3, 4],
      [4, 5],
      [5, 6],
      [4, 7],
    ];
    const gram = Array.from({ length: 8 }, (_, i) =>
      Array.from({ length: 8 }, (__, j) =>
        i === j ? 4n : edges.some(([a, c]) => (a === i && c === j) || (a === j && c === i)) ? -2n : 0n,
      ),
    );
    const tree: CheckTree = { place: '/', method: 'frames', dimension: 8, gram, primes: [2n], nodes: 0n, orbits: 0n };
    expect(counted(tree)).toEqual({ nodes: 2295n, orbits: 2025n });
  });
});

describe('arithmetic', () => {
  it('primes up to 5,000, and strong pseudoprimes to few bases are none', () => {
    for (let n = 2n; n < 5_000n; n += 1n) expect([n, isPrime(n)]).toEqual([n, primesOf(n)[0] === n]);
    expect([isPrime(3_215_031_751n), isPrime(2n ** 61n - 1n)]).toEqual([false, true]);
  });

  it('square roots of units, m up to 300', () => {
    for (let m = 1n; m <= 300n; m += 1n)
      for (let a = 1n; a <= m; a += 1n) {
        if (primesOf(m).some((p) => a % p === 0n)) continue;
        const plain: bigint[] = [];
        for (let t = 0n; 2n * t <= m; t += 1n) if ((t * t - a) % m === 0n) plain.push(t);
        expect([m, a, rootsOfUnit(a, m, primesOf(m))]).toEqual([m, a, plain]);
      }
  });
});
