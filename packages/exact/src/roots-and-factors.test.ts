/** Factors and square roots modulo m against plain search. */
import { describe, expect, it } from 'vitest';
import { gcd } from './integers.ts';
import { primeFactors } from './full-factor.ts';
import { unitRoots } from './root-modulo.ts';

describe('primeFactors', () => {
  it('of every number up to 3,000, and of products of primes beyond trial division', () => {
    for (let n = 1; n <= 3_000; n += 1) {
      const primes: bigint[] = [];
      for (let p = 2, rest = n; rest > 1; p += 1) {
        if (rest % p === 0) primes.push(BigInt(p));
        while (rest % p === 0) rest /= p;
      }
      expect([n, primeFactors(BigInt(n))]).toEqual([n, primes]);
    }
    const [p, q, s] = [1_000_003n, 999_999_937n, 4_099n];
    expect(primeFactors(p * q)).toEqual([p, q]);
    expect(primeFactors(p * p * s * s * 12n)).toEqual([2n, 3n, s, p]);
    expect(primeFactors(q * q)).toEqual([q]);
  });

  it('2^61 − 1 is prime (Pervushin 1883), 2^67 − 1 = 193,707,721 · 761,838,257,287 (Cole 1903); above the bound it is null', () => {
    expect(primeFactors(2n ** 61n - 1n)).toEqual([2n ** 61n - 1n]);
    expect(primeFactors(2n ** 67n - 1n)).toEqual([193_707_721n, 761_838_257_287n]);
    expect(primeFactors(2n ** 127n - 1n)).toBeNull();
    // strong pseudoprimes to many bases are composite: 3,215,031,751 to 2, 3, 5, 7 (Pomerance–Selfridge–Wagstaff 1980)
    expect(primeFactors(3_215_031_751n)).toEqual([151n, 751n, 28_351n]);
  });
});

describe('unitRoots', () => {
  it('are all of them, m up to 400', () => {
    for (let m = 1n; m <= 400n; m += 1n)
      for (let a = 0n; a < m; a += a < 20n ? 1n : 7n) {
        if (gcd(a, m) !== 1n) continue;
        const plain: bigint[] = [];
        for (let t = 0n; 2n * t <= m; t += 1n) if ((t * t - a) % m === 0n) plain.push(t);
        expect([m, a, unitRoots(a, m, primeFactors(m)!)]).toEqual([m, a, plain]);
      }
  });
});
