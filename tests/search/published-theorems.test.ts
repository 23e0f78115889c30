/** Theorems about whole families, both directions. */
import { describe, expect, it } from 'vitest';
import { ask, typed } from './ask.ts';
import type { Source } from '@palmette/lattice';

const gcd = (a: number, b: number): number => (b === 0 ? a : gcd(b, a % b));

/**
 * Lisca's set R for p = m²: the smallest set closed under q → p − q and q → q⁻¹ that contains (1) q = mk ± 1,
 * gcd(m, k) = 1 or 2 (the 2 by the later correction), (2) q = d(m ± 1), d | 2m ∓ 1, (3) q = d(m ± 1), d odd, d | m ± 1.
 * Lisca, Geom. Topol. 11 (2007).
 */
function liscaSet(m: number): Set<number> {
  const p = m * m;
  const seeds = new Set<number>();
  const add = (q: number) => q > 0 && q < p && gcd(p, q) === 1 && seeds.add(q);
  for (let k = 1; k < m; k += 1) {
    if (gcd(m, k) > 2) continue;
    add(m * k + 1);
    add(m * k - 1);
  }
  for (let d = 2; d <= 2 * m + 1; d += 1) {
    if ((2 * m - 1) % d === 0) add(d * (m + 1));
    if ((2 * m + 1) % d === 0) add(d * (m - 1));
    if (d % 2 === 1 && (m + 1) % d === 0) add(d * (m + 1));
    if (d % 2 === 1 && (m - 1) % d === 0) add(d * (m - 1));
  }
  for (const queue = [...seeds]; queue.length > 0;) {
    const q = queue.pop()!;
    const inverse = Array.from({ length: p }, (_, x) => x).find((x) => (x * q) % p === 1)!;
    for (const next of [p - q, inverse]) {
      if (seeds.has(next)) continue;
      seeds.add(next);
      queue.push(next);
    }
  }
  return seeds;
}

describe('Lisca: both chains of m²/q embed at their own rank iff q is in R', () => {
  it.each([2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13])('m = %i', (m) => {
    const p = m * m;
    const expected = liscaSet(m);
    for (let q = 1; q < p; q += 1) {
      if (gcd(p, q) !== 1 || q > p - q) continue;
      const both = (['chain', 'dual'] as const).every(
        (orientation) =>
          ask({ kind: 'fraction', p, q, orientation }, { excess: 0 }, { scope: 'one' }).conclusion.verdict === 'embeds',
      );
      expect({ p, q, embeds: both }).toEqual({ p, q, embeds: expected.has(q) });
    }
  });
});

// four strands: nullity 1, the legs match (computed independently when the conventions page was written)
describe('P(a, b, −b, −a) embeds at the full rank of the reduced lattice', () => {
  const pairs = [2, 3, 4, 5, 6, 7, 8].flatMap((a) =>
    [2, 3, 4, 5, 6, 7, 8].filter((b) => b >= a).map((b) => [a, b] as const),
  );
  it.each(pairs)('a = %i, b = %i', (a, b) => {
    const found = ask(typed(`P(${a}, ${b}, ${-b}, ${-a})`), { excess: 0 }, { scope: 'one' });
    expect(found.conclusion).toMatchObject({ verdict: 'embeds', dimension: a + b });
  });
});

// Greene–Jabuka, Amer. J. Math. 133 (2011): of odd three-strand pretzels every cancelling pair embeds, and P(3, a, −a−12), a = 3, 5, 7, 9, besides
describe('odd three-strand pretzels of square determinant, strands up to 9', () => {
  it('embed exactly where a pair cancels or the strands are 3, a, −a − 12', () => {
    const strands = [3, 5, 7, 9];
    for (const a of strands) {
      for (const b of strands.filter((x) => x >= a)) {
        for (const c of [3, 5, 7, 9, 11, 13, 15, 17, 19, 21]) {
          const determinant = Math.abs(a * b - a * c - b * c);
          if (!Number.isInteger(Math.sqrt(determinant)) || determinant === 0) continue;
          const cancels = c === a || c === b;
          const sporadic = a === 3 && c === b + 12;
          const found = ask(typed(`P(${a}, ${b}, ${-c})`), { excess: 0 }, { scope: 'one' });
          expect({ a, b, c: -c, verdict: found.conclusion.verdict }).toEqual({
            a,
            b,
            c: -c,
            verdict: cancels || sporadic ? 'embeds' : 'excluded',
          });
        }
      }
    }
  });
});

// Lecuona on complementary legs: star(e0; p/q, p/(p−q), r/s) embeds at n = rank iff chain(e0 + 1; r/s) does
describe('complementary legs', () => {
  const leg = (q: number, p: number) => [q, p] as const;
  it('a star with complementary legs behaves as what is left of it', () => {
    for (const [p, q] of [
      [2, 1],
      [3, 1],
      [5, 2],
      [7, 3],
    ] as const) {
      for (const [r, s] of [
        [3, 2],
        [4, 1],
        [5, 3],
        [9, 2],
      ] as const) {
        for (const e0 of [-2, -3]) {
          const star: Source = {
            kind: 'seifert',
            centre: e0,
            fibres: [leg(q, p), leg(p - q, p), leg(s, r)],
            orientation: 'entered',
          };
          const rest: Source = { kind: 'seifert', centre: e0 + 1, fibres: [leg(s, r)], orientation: 'entered' };
          if (e0 + 1 + s / r >= 0) continue;
          const verdict = (source: Source) => ask(source, { excess: 0 }, { scope: 'one' }).conclusion.verdict;
          expect({ e0, p, q, r, s, verdict: verdict(star) }).toEqual({ e0, p, q, r, s, verdict: verdict(rest) });
        }
      }
    }
  });
});
