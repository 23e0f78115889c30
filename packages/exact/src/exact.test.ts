import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  bigMatrix,
  determinant,
  elementaryDivisors,
  eliminateSymmetric,
  gcd,
  hermiteBasis,
  hilbertSymbol,
  identityMatrix,
  integerSqrt,
  inverse,
  isIdentity,
  isSquare,
  lllGram,
  multiply,
  rationalKernel,
  splitOff,
  transpose,
  trialFactor,
  type BigMatrix,
} from './index.ts';

const square = (n: number, size = 4) =>
  fc.array(fc.array(fc.integer({ min: -size, max: size }), { minLength: n, maxLength: n }), {
    minLength: n,
    maxLength: n,
  });
const gramOf = (b: readonly (readonly number[])[]): BigMatrix => multiply(bigMatrix(b), transpose(bigMatrix(b)));

/** Leibniz' sum over permutations: slow and obvious. */
function leibniz(m: BigMatrix): bigint {
  if (m.length === 0) return 1n;
  return m[0]!.reduce(
    (sum, x, j) => sum + (j % 2 === 0 ? x : -x) * leibniz(m.slice(1).map((row) => row.filter((_, k) => k !== j))),
    0n,
  );
}

/** gcd of all k × k minors: the product of the first k elementary divisors. */
function minorGcd(m: BigMatrix, k: number): bigint {
  const choose = (n: number, size: number): number[][] =>
    size === 0 ? [[]] : n < size ? [] : [...choose(n - 1, size), ...choose(n - 1, size - 1).map((s) => [...s, n - 1])];
  let g = 0n;
  for (const rows of choose(m.length, k))
    for (const columns of choose(m[0]!.length, k)) g = gcd(g, leibniz(rows.map((i) => columns.map((j) => m[i]![j]!))));
  return g;
}

describe('exact linear algebra', () => {
  it('determinant agrees with the sum over permutations', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 5 }).chain((n) => square(n)),
        (rows) => {
          const m = bigMatrix(rows);
          expect(determinant(m)).toBe(leibniz(m));
        },
      ),
      { numRuns: 200 },
    );
  });

  it('inverse times matrix is the determinant', () => {
    fc.assert(
      fc.property(square(4), (rows) => {
        const m = bigMatrix(rows);
        const d = determinant(m);
        if (d === 0n) return;
        const { numerator, denominator } = inverse(m);
        expect(denominator).toBe(d);
        expect(multiply(m, numerator)).toEqual(identityMatrix(4).map((row) => row.map((x) => x * d)));
      }),
      { numRuns: 200 },
    );
  });

  it('elementary divisors are quotients of gcds of minors', () => {
    fc.assert(
      fc.property(square(4, 6), (rows) => {
        const m = bigMatrix(rows);
        const found = elementaryDivisors(m);
        let product = 1n;
        found.forEach((d, k) => {
          product *= d;
          expect({ rows, k, product }).toEqual({ rows, k, product: minorGcd(m, k + 1) });
        });
        if (found.length < 4) expect(minorGcd(m, found.length + 1)).toBe(0n);
      }),
      { numRuns: 150 },
    );
  });

  it('elimination gives inertia, determinant and kernel of any symmetric matrix', () => {
    fc.assert(
      fc.property(square(5, 2), (rows) => {
        const m = bigMatrix(rows.map((row, i) => row.map((x, j) => (i <= j ? x : rows[j]![i]!))));
        const e = eliminateSymmetric(m);
        expect(e.positive + e.negative + e.zero).toBe(5);
        if (e.zero === 0) {
          const product = e.pivots.reduce((p, d) => p * Number(d.valueOf()), 1);
          if (!e.mixed) expect(product).toBeCloseTo(Number(determinant(m)), 6);
          expect(e.negative % 2 === 0).toBe(determinant(m) > 0n);
        } else expect(determinant(m)).toBe(0n);
        if (!e.mixed)
          for (const v of rationalKernel(e, 5))
            expect(
              multiply(m, transpose([v]))
                .flat()
                .every((x) => x === 0n),
            ).toBe(true);
      }),
      { numRuns: 300 },
    );
  });

  it('names the inertia of forms without a nonzero diagonal entry', () => {
    expect(
      eliminateSymmetric(
        bigMatrix([
          [0, 1],
          [1, 0],
        ]),
      ),
    ).toMatchObject({ positive: 1, negative: 1, zero: 0 });
    expect(
      eliminateSymmetric(
        bigMatrix([
          [0, 0],
          [0, 0],
        ]),
      ),
    ).toMatchObject({ positive: 0, negative: 0, zero: 2 });
  });

  it('splits off a saturated sublattice by a unimodular matrix', () => {
    fc.assert(
      fc.property(
        fc.array(fc.array(fc.integer({ min: -9, max: 9 }), { minLength: 5, maxLength: 5 }), {
          minLength: 1,
          maxLength: 3,
        }),
        (rows) => {
          const vectors = bigMatrix(rows);
          if (hermiteBasis(vectors).length < vectors.length) return;
          const { matrix, inverse: back } = splitOff(vectors, 5);
          expect(isIdentity(multiply(matrix, back))).toBe(true);
          // each vector is an integer combination of the last columns
          const coefficients = multiply(back, transpose(vectors));
          expect(
            coefficients
              .slice(0, 5 - vectors.length)
              .flat()
              .every((x) => x === 0n),
          ).toBe(true);
        },
      ),
      { numRuns: 200 },
    );
  });

  it('LLL keeps the lattice and shortens a scrambled basis', () => {
    fc.assert(
      fc.property(square(4, 30), (rows) => {
        const gram = gramOf(rows);
        if (determinant(gram) === 0n) return;
        const { change, inverse: back, gram: reduced } = lllGram(gram);
        expect(isIdentity(multiply(change, back))).toBe(true);
        expect(multiply(transpose(change), multiply(gram, change))).toEqual(reduced);
        expect(
          reduced[0]![0]! <= gram.reduce((least, row, i) => (row[i]! < least ? row[i]! : least), gram[0]![0]!) * 8n,
        ).toBe(true);
      }),
      { numRuns: 150 },
    );
  });

  it('LLL finds A_2 behind entries of 10^18', () => {
    const k = 10n ** 18n;
    const u = [
      [1n, 0n],
      [k, 1n],
    ];
    const gram = multiply(
      u,
      multiply(
        bigMatrix([
          [2, -1],
          [-1, 2],
        ]),
        transpose(u),
      ),
    );
    const { gram: reduced } = lllGram(gram);
    expect([reduced[0]![0], reduced[1]![1]]).toEqual([2n, 2n]);
  });

  it('Hermite form spans the same lattice', () => {
    fc.assert(
      fc.property(square(4, 6), (rows) => {
        const m = bigMatrix(rows);
        const h = hermiteBasis(m);
        if (h.length === 4)
          expect(h.reduce((p, row, i) => p * row[i]!, 1n)).toBe(determinant(m) < 0n ? -determinant(m) : determinant(m));
        expect(hermiteBasis([...m, ...h])).toEqual(h);
      }),
      { numRuns: 150 },
    );
  });
});

describe('numbers', () => {
  it('square roots', () => {
    fc.assert(
      fc.property(fc.bigInt({ min: 0n, max: 10n ** 60n }), (a) => {
        const s = integerSqrt(a);
        expect(s * s <= a && (s + 1n) * (s + 1n) > a).toBe(true);
        expect(isSquare(a * a)).toBe(true);
      }),
    );
  });

  it('trial division', () => {
    expect(trialFactor(-360n)).toEqual({
      primes: [
        { prime: 2n, exponent: 3 },
        { prime: 3n, exponent: 2 },
        { prime: 5n, exponent: 1 },
      ],
      rest: 1n,
    });
    expect(trialFactor(1000003n * 1000033n, 1000).rest).toBe(1000003n * 1000033n);
  });

  // Hilbert's reciprocity: the product over all places is 1 (Serre, ch. III, theorem 3)
  it('Hilbert symbols multiply to 1 over all places', () => {
    const nonzero = fc.integer({ min: -60, max: 60 }).filter((x) => x !== 0);
    fc.assert(
      fc.property(nonzero, nonzero, (a, b) => {
        const primes = new Set([
          2n,
          ...trialFactor(BigInt(a)).primes.map((p) => p.prime),
          ...trialFactor(BigInt(b)).primes.map((p) => p.prime),
        ]);
        const real = a < 0 && b < 0 ? -1 : 1;
        expect([...primes].reduce((product, p) => product * hilbertSymbol(BigInt(a), BigInt(b), p), real)).toBe(1);
      }),
      { numRuns: 500 },
    );
  });
});
