/** Numbers of embeddings that others published, each with its source. */
import { describe, expect, it } from 'vitest';
import { ask, factorial, falling, matrix, typed } from './ask.ts';
import type { Source } from '@palmette/lattice';

const diagonal = (entries: readonly number[]): Source =>
  matrix(entries.map((d, i) => entries.map((_, j) => (i === j ? d : 0))));
const total = (source: Source, dimension: number): bigint => ask(source, { dimension }, { arithmetic: false }).total;
const divisors = (m: number): number[] => Array.from({ length: m }, (_, i) => i + 1).filter((d) => m % d === 0);

describe('sums of squares: the total for ⟨m⟩ in Z^n is r_n(m)', () => {
  // Jacobi: r_2 = 4(d_1 − d_3), r_4 = 8 Σ_{4∤d|m} d, r_8 = 16 Σ (−1)^{m+d} d³ (Hardy–Wright, ch. XX)
  it.each(Array.from({ length: 40 }, (_, i) => i + 1))('m = %i in Z^2, Z^4, Z^8', (m) => {
    const d = divisors(m);
    const two = 4 * (d.filter((x) => x % 4 === 1).length - d.filter((x) => x % 4 === 3).length);
    const four = 8 * d.filter((x) => x % 4 !== 0).reduce((a, b) => a + b, 0);
    const eight = 16 * d.reduce((sum, x) => sum + ((m + x) % 2 === 0 ? 1 : -1) * x ** 3, 0);
    expect([total(matrix([[m]]), 2), total(matrix([[m]]), 4), total(matrix([[m]]), 8)].map(Number)).toEqual([
      two,
      four,
      eight,
    ]);
  });

  // r_3: Gauss, Legendre; r_5(10), r_6(12), r_7(9): Hardy–Wright, ch. XX
  it.each([
    [3, 1, 6],
    [3, 2, 12],
    [3, 3, 8],
    [3, 7, 0],
    [3, 9, 30],
    [3, 14, 48],
    [3, 15, 0],
    [5, 10, 560],
    [6, 12, 2080],
    [7, 9, 3542],
  ])('r_%i(%i) = %i', (n, m, expected) => {
    expect(total(matrix([[m]]), n)).toBe(BigInt(expected));
  });

  // Jacobi: 24 for an even power of two
  it('⟨2^31⟩ in Z^4 has 24', () => {
    expect(total(matrix([[2 ** 31]]), 4)).toBe(24n);
  });
});

describe('root lattices (common practice)', () => {
  it.each([1, 2, 3, 5, 8])('I_%i in Z^n: 2^k n!/(n − k)!', (k) => {
    for (const n of [k - 1, k, k + 2])
      expect(total(diagonal(new Array<number>(k).fill(1)), n)).toBe(n < k ? 0n : 2n ** BigInt(k) * falling(n, k));
  });

  it.each([2, 4, 5, 7, 12, 30])('A_%i: 2^(r+1) n!/(n − r − 1)!, one orbit', (r) => {
    for (const n of [r, r + 1, r + 3]) {
      const found = ask(typed(`A${r}`), { dimension: n }, { arithmetic: false });
      expect([found.orbits, found.total]).toEqual(n <= r ? [0, 0n] : [1, 2n ** BigInt(r + 1) * falling(n, r + 1)]);
    }
  });

  it('A_1: 2n(n − 1); A_3: 8 n!/(n − 3)! + 16 n!/(n − 4)!', () => {
    for (const n of [2, 3, 4, 6]) {
      expect(total(typed('A1'), n)).toBe(2n * BigInt(n) * BigInt(n - 1));
      expect(total(typed('A3'), n)).toBe(8n * falling(n, 3) + 16n * falling(n, 4));
    }
  });

  it.each([5, 6, 9])('D_%i: 2^r n!/(n − r)!', (r) => {
    for (const n of [r, r + 2]) expect(total(typed(`D${r}`), n)).toBe(2n ** BigInt(r) * falling(n, r));
  });

  it('D_4: 48 n!/(n − 4)!, three orbits', () => {
    for (const n of [4, 6]) {
      const found = ask(typed('D4'), { dimension: n });
      expect([found.orbits, found.total]).toEqual([3, 48n * falling(n, 4)]);
    }
  });

  // E_6: Mordell, Quart. J. Math. 8 (1937); E_7, E_8 contain it
  it.each(['E6', 'E7', 'E8'])('%s embeds in no Z^n', (name) => {
    expect(ask(typed(name), { any: true }).conclusion).toMatchObject({ verdict: 'excluded', dimension: null });
    expect(ask(typed(name), { least: {} }).conclusion).toMatchObject({ verdict: 'excluded', dimension: null });
  });

  it('A_200 and a chain of 2,000 vertices do not overflow anything', () => {
    expect(ask(typed('A200'), { dimension: 201 }).orbits).toBe(1);
    const chain: Source = { kind: 'fraction', p: 2001, q: 2000, orientation: 'chain' };
    expect(ask(chain, { dimension: 2001 }).orbits).toBe(1);
  });
});

describe('X·Xᵗ = m·I_n', () => {
  it.each([1, 2, 3, 4, 5, 9, 25])('n = 2, m = %i: 2 r_2(m)', (m) => {
    expect(total(diagonal([m, m]), 2)).toBe(2n * total(matrix([[m]]), 2));
  });

  // counts of quaternion orders times symmetries, computed independently when the conventions page was written
  it.each([
    [1, 1, 384],
    [2, 3, 1152],
    [3, 8, 3072],
    [4, 3, 1152],
    [5, 12, 4608],
  ])('n = 4, m = %i: %i orbits, %i in all', (m, orbits, sum) => {
    const found = ask(diagonal([m, m, m, m]), { dimension: 4 });
    expect([found.orbits, found.total]).toEqual([orbits, BigInt(sum)]);
  });
});

describe('Mordell 1930, Ko 1937: rank ≤ 5 embeds in Z^(r+3), and I_{r−1} + ⟨7⟩ needs it', () => {
  it.each([1, 2, 3, 4, 5])('rank %i', (r) => {
    const source = diagonal([...new Array<number>(r - 1).fill(1), 7]);
    expect(ask(source, { least: {} }).conclusion).toMatchObject({ verdict: 'embeds', dimension: r + 3 });
    expect(total(source, r + 2)).toBe(0n);
  });
});

describe('rank 6 may need Z^10 (Kim–Oh, J. Number Theory 63 (1997))', () => {
  const form = matrix([
    [2, -1, 0, -1, 0, 0],
    [-1, 6, 1, -1, -1, 1],
    [0, 1, 3, 0, 1, 2],
    [-1, -1, 0, 2, 1, 0],
    [0, -1, 1, 1, 2, 0],
    [0, 1, 2, 0, 0, 3],
  ]);
  it('determinant 39: none in Z^9, one orbit of 619,315,200 in Z^10', () => {
    expect(total(form, 9)).toBe(0n);
    const found = ask(form, { dimension: 10 });
    expect([found.orbits, found.total]).toEqual([1, 619_315_200n]);
  });
});

describe('worked cases of the conventions page', () => {
  it('25/2: [13, 2] in Z^2 one orbit of 8; the dual chain is excluded at 12 and 13', () => {
    expect(total(typed('25/2'), 2)).toBe(8n);
    const dual: Source = { kind: 'fraction', p: 25, q: 2, orientation: 'dual' };
    expect([total(dual, 12), total(dual, 13)]).toEqual([0n, 0n]);
  });

  it('169/14: [13, 2^13] in Z^14 takes at most 10,000 nodes', () => {
    const found = ask(typed('169/14'), { dimension: 14 });
    expect(found.orbits).toBe(1);
    expect(found.nodes <= 10_000n).toBe(true);
  });

  it('10000/201: one orbit on each side', () => {
    expect(total({ kind: 'fraction', p: 10000, q: 201, orientation: 'chain' }, 51)).toBe(2n ** 51n * factorial(51));
    expect(total({ kind: 'fraction', p: 10000, q: 201, orientation: 'dual' }, 52)).toBe(2n ** 52n * factorial(52));
  });

  it('P(3,3,−15) at n = 6: two orbits, 92,160; P(3,3,−3,−3): the same; P(2,2,−2,−2): three orbits, 1,152', () => {
    for (const [text, rank, orbits, sum] of [
      ['P(3,3,-15)', 6, 2, 92_160n],
      ['P(3,3,-3,-3)', 6, 2, 92_160n],
      ['P(2,2,-2,-2)', 4, 3, 1_152n],
    ] as const) {
      const found = ask(typed(text), { dimension: rank });
      expect([text, found.orbits, found.total]).toEqual([text, orbits, sum]);
    }
  });

  it('figure-eight: least Z^4, one orbit of 192; 18/5 in Z^4: two orbits, 576; 18/13 in Z^5: one, 1,920', () => {
    const eight = ask(
      matrix([
        [2, -1],
        [-1, 3],
      ]),
      { least: {} },
    );
    expect([eight.conclusion.dimension, eight.orbits, eight.total]).toEqual([4, 1, 192n]);
    expect([ask(typed('18/5'), { dimension: 4 }).orbits, total(typed('18/5'), 4)]).toEqual([2, 576n]);
    expect([ask(typed('18/13'), { dimension: 5 }).orbits, total(typed('18/13'), 5)]).toEqual([1, 1_920n]);
  });

  it('Σ(2,3,11) embeds in no Z^n', () => {
    const sphere: Source = {
      kind: 'seifert',
      centre: -2,
      fibres: [
        [1, 2],
        [2, 3],
        [9, 11],
      ],
      orientation: 'definite',
    };
    expect(ask(sphere, { least: {} }).conclusion).toMatchObject({ verdict: 'excluded', dimension: null });
  });

  it('A_2 in a basis with entries of 10^18', () => {
    const k = 10n ** 18n;
    const rows = [
      ['2', String(2n * k - 1n)],
      [String(2n * k - 1n), String(2n * k * k - 2n * k + 2n)],
    ];
    const found = ask(matrix(rows), { dimension: 3 });
    expect([found.orbits, found.total]).toEqual([1, 48n]);
  });
});
