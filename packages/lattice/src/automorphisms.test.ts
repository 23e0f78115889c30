/** Automorphism groups against published orders and against all integer matrices. */
import {
  hermiteBasis,
  integerSqrt,
  inverse,
  multiply,
  transpose,
  type BigMatrix,
  type ReadonlyBigMatrix,
} from '@palmette/exact';
import { describe, expect, it } from 'vitest';
import { BeyondBound } from './automorphism-bounds.ts';
import { automorphismGroup, type AutomorphismGroup } from './automorphisms.ts';
import { buildLattice, rootLatticeSource } from './index.ts';
import { seededIntegers, seededProduct, type SeededIntegers } from './seeded-integers.ts';

const root = (type: 'A' | 'D' | 'E', rank: number): BigMatrix => buildLattice(rootLatticeSource(type, rank)).gram;
const diagonal = (entries: readonly (bigint | number)[]): BigMatrix =>
  entries.map((x, i) => entries.map((_, j) => (i === j ? BigInt(x) : 0n)));
const chain = (weights: readonly number[]): BigMatrix =>
  weights.map((w, i) => weights.map((_, j) => (i === j ? BigInt(w) : Math.abs(i - j) === 1 ? -1n : 0n)));

function sum(...parts: readonly BigMatrix[]): BigMatrix {
  const size = parts.reduce((total, part) => total + part.length, 0);
  const out = Array.from({ length: size }, () => new Array<bigint>(size).fill(0n));
  let offset = 0;
  for (const part of parts) {
    part.forEach((row, i) => row.forEach((x, j) => (out[offset + i]![offset + j] = x)));
    offset += part.length;
  }
  return out;
}

function factorial(n: number): bigint {
  return n < 2 ? 1n : BigInt(n) * factorial(n - 1);
}

/** The same form in another basis: row and column operations, all of determinant ±1. */
function scrambled(gram: ReadonlyBigMatrix, random: SeededIntegers, moves: number): BigMatrix {
  const out = gram.map((row) => [...row]);
  for (let k = 0; k < moves; k += 1) {
    const [i, j] = [random(0, out.length - 1), random(0, out.length - 1)];
    if (i === j) continue;
    const sign = random(0, 1) === 0 ? 1n : -1n;
    out[i] = out[i]!.map((x, c) => x + sign * out[j]![c]!);
    for (const row of out) row[i]! += sign * row[j]!;
  }
  return out;
}

/** The group, its generators checked against the form. */
function group(gram: ReadonlyBigMatrix): AutomorphismGroup {
  const found = automorphismGroup(gram);
  if (found instanceof BeyondBound) throw found;
  for (const x of found.generators) expect(multiply(multiply(x, gram), transpose(x))).toEqual(gram);
  return found;
}

/** Every integer matrix X with X·gram·Xᵀ = gram, row by row from the box |x_i|² ≤ norm·(gram⁻¹)_ii. */
function byDefinition(gram: ReadonlyBigMatrix, box: number): BigMatrix[] {
  const norm = (x: readonly bigint[], y: readonly bigint[]) => multiply(multiply([x], gram), transpose([y]))[0]![0]!;
  let vectors: bigint[][] = [[]];
  for (let i = 0; i < gram.length; i += 1)
    vectors = vectors.flatMap((v) => Array.from({ length: 2 * box + 1 }, (_, k) => [...v, BigInt(k - box)]));
  let partial: BigMatrix[] = [[]];
  for (let i = 0; i < gram.length; i += 1) {
    const fits = vectors.filter((v) => norm(v, v) === gram[i]![i]);
    partial = partial.flatMap((rows) =>
      fits.filter((v) => rows.every((row, j) => norm(row, v) === gram[j]![i])).map((v) => [...rows, v]),
    );
  }
  return partial;
}

/** All products of the generators. */
function closure({ generators }: AutomorphismGroup, rank: number): Set<string> {
  const write = (m: ReadonlyBigMatrix) => m.map((row) => row.join()).join(';');
  const start = diagonal(new Array<number>(rank).fill(1));
  const seen = new Map([[write(start), start]]);
  for (const element of seen.values()) {
    for (const generator of generators) {
      const next = multiply(element, generator);
      if (!seen.has(write(next))) seen.set(write(next), next);
    }
  }
  return new Set(seen.keys());
}

describe('automorphism groups', () => {
  // orders of Weyl groups and of the automorphisms of root lattices: Conway–Sloane, Sphere Packings, Lattices and
  // Groups, ch. 4: A_n 2·(n+1)! (n ≥ 2), D_n 2^n·n! (n ≠ 4), D_4 1152, E_6 2·51840, E_7 2903040, E_8 696729600
  it.each([
    ['A_1', root('A', 1), 2n],
    ['A_2', root('A', 2), 12n],
    ['A_3', root('A', 3), 48n],
    ['A_9', root('A', 9), 2n * factorial(10)],
    ['A_30', root('A', 30), 2n * factorial(31)],
    ['D_4', root('D', 4), 1152n],
    ['D_5', root('D', 5), 32n * factorial(5)],
    ['D_20', root('D', 20), 2n ** 20n * factorial(20)],
    ['E_6', root('E', 6), 103_680n],
    ['E_7', root('E', 7), 2_903_040n],
    ['E_8', root('E', 8), 696_729_600n],
  ])('%s', (_, gram, order) => {
    expect(group(gram).order).toBe(order);
  });

  it('sums: the wreath product on equal summands, the product on different ones', () => {
    expect(group(sum(root('E', 8), root('E', 8), root('E', 8))).order).toBe(696_729_600n ** 3n * 6n);
    expect(group(sum(...new Array<BigMatrix>(6).fill(root('A', 2)))).order).toBe(12n ** 6n * factorial(6));
    expect(group(sum(root('D', 4), root('A', 3), root('E', 6))).order).toBe(1152n * 48n * 103_680n);
    expect(group(sum(root('A', 3), diagonal([1, 1, 7]))).order).toBe(48n * 8n * 2n);
  });

  it('Z^n and its multiples: 2^n·n!', () => {
    for (const n of [1, 2, 5, 12, 30]) {
      expect(group(diagonal(new Array<number>(n).fill(1))).order).toBe(2n ** BigInt(n) * factorial(n));
      expect(group(diagonal(new Array<number>(n).fill(3))).order).toBe(2n ** BigInt(n) * factorial(n));
    }
  });

  // Conway–Sloane, ch. 4, section 10 (Barnes–Wall, order 89181388800); the group of the code RM(1, 4) is AGL(4, 2) of
  // order 322560 (MacWilliams–Sloane, The Theory of Error-Correcting Codes, ch. 13, section 9), the frame of the 2·e_i
  // holds all vectors of norm 4, and every change of signs is allowed
  it('lattices that their shortest vectors do not generate: codes of length 16', () => {
    const places = Array.from({ length: 16 }, (_, x) => x);
    const affine = [places.map(() => 1n), ...[0, 1, 2, 3].map((bit) => places.map((x) => BigInt((x >> bit) & 1)))];
    const frame = (length: bigint) => places.map((x) => places.map((y) => (x === y ? length : 0n)));
    const even = places.slice(1).map((x) => places.map((y) => (y === 0 || y === x ? 2n : 0n)));
    const gramOf = (rows: BigMatrix, divisor: bigint) => {
      const basis = hermiteBasis(rows);
      return multiply(basis, transpose(basis)).map((row) => row.map((x) => x / divisor));
    };
    expect(group(gramOf([...affine, ...frame(2n)], 1n)).order).toBe(2n ** 16n * 322_560n);
    expect(group(gramOf([...affine, ...even, ...frame(4n)], 2n)).order).toBe(89_181_388_800n);
  });

  it('does not depend on the basis', () => {
    const random = seededIntegers(5);
    for (const [gram, order] of [
      [root('D', 4), 1152n],
      [root('E', 8), 696_729_600n],
      [sum(root('A', 4), diagonal([1, 1])), 240n * 8n],
      [chain([3, 2, 2, 3]), 24n],
    ] as const) {
      for (let trial = 0; trial < 5; trial += 1) {
        const other = scrambled(gram, random, 60);
        expect({ other, order: group(other).order }).toEqual({ other, order });
      }
    }
  });

  it('long chains: reflections in the 2s, the reversal, and −1', () => {
    // isolated 2s: (Z/2)^k for k of them, times ±1, times the reversal of a palindrome
    expect(group(chain(Array.from({ length: 30 }, (_, i) => 2 + ((i * 7) % 5)))).order).toBe(2n ** 7n);
    const palindrome = [2, 3, 4, 5, 3, 4, 4, 3, 5, 4, 3, 2];
    expect(group(chain(palindrome)).order).toBe(2n ** 4n);
    // [13, 2^13]: the short vectors up to norm 13 are out of reach, the layers are not; 2·14! since A_13 is a summand
    // of full rank less one and the 13 fixes its class
    expect(group(chain([13, ...new Array<number>(13).fill(2)])).order).toBe(2n * factorial(14));
  });

  it('are all integer matrices that preserve the form, on random forms of rank 1 to 3', () => {
    const random = seededIntegers(31);
    for (let trial = 0; trial < 60; trial += 1) {
      const rank = random(1, 3);
      const gram = seededProduct(random, rank, rank + 1);
      const found = group(gram);
      const box = reach(gram);
      const all = byDefinition(gram, box).map((m) => m.map((row) => row.join()).join(';'));
      expect({ gram, order: found.order }).toEqual({ gram, order: BigInt(all.length) });
      expect({ gram, elements: [...closure(found, rank)].sort() }).toEqual({ gram, elements: all.sort() });
    }
  });

  it('entries beyond doubles', () => {
    const big = [
      [10n ** 30n, 1n],
      [1n, 10n ** 30n],
    ];
    expect(group(big).order).toBe(4n);
    expect(group(root('A', 3).map((row) => row.map((x) => x * 10n ** 20n))).order).toBe(48n);
  });

  it('names the bound that it meets', () => {
    const wide = automorphismGroup(diagonal(new Array<number>(101).fill(1)));
    expect(wide).toBeInstanceOf(BeyondBound);
    expect((wide as BeyondBound).message).toBe('the rank is 101, above 100');
    // twelve twos around one vertex: its class has 2^12 shortest vectors
    const star = diagonal([7, ...new Array<number>(12).fill(2)]);
    for (let i = 1; i <= 12; i += 1) star[0]![i] = star[i]![0] = 1n;
    const many = automorphismGroup(star);
    expect((many as BeyondBound).message).toBe('more than 4000 short vectors up to sign');
  });

  it('refuses a form that is not definite', () => {
    expect(() => automorphismGroup(diagonal([1, 0]))).toThrow(RangeError);
  });
});

/** A bound on every entry of a vector no longer than the longest basis vector: x_i² ≤ norm · (gram⁻¹)_ii. */
function reach(gram: ReadonlyBigMatrix): number {
  const { numerator, denominator } = inverse(gram);
  const longest = gram.map((row, i) => row[i]!).reduce((most, x) => (x > most ? x : most));
  const bounds = numerator.map((row, i) => integerSqrt((longest * row[i]!) / denominator));
  return Math.max(...bounds.map(Number));
}
