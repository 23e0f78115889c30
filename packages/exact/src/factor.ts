/**
 * Trial division within a bound. What is left over is reported, never guessed at: a ground that needs a prime is
 * skipped if its prime was not proved.
 */
import { abs } from './integers.ts';

export interface PartialFactorisation {
  /** Proved primes with their exponents, ascending. */
  readonly primes: readonly { readonly prime: bigint; readonly exponent: number }[];
  /** The cofactor without prime factor up to the bound; 1 if the factorisation is complete. */
  readonly rest: bigint;
}

/** Factors |a| > 0 by trial division up to `bound`; a cofactor below bound² is prime and counted as one. */
export function trialFactor(a: bigint, bound = 1_000_000): PartialFactorisation {
  let rest = abs(a);
  if (rest === 0n) throw new RangeError('expected a nonzero integer, found 0');
  const primes: { prime: bigint; exponent: number }[] = [];
  const take = (p: bigint) => {
    let exponent = 0;
    for (; rest % p === 0n; exponent += 1) rest /= p;
    if (exponent > 0) primes.push({ prime: p, exponent });
  };
  take(2n);
  for (let p = 3; p <= bound; p += 2) {
    if (BigInt(p) * BigInt(p) > rest) break;
    if (rest % BigInt(p) === 0n) take(BigInt(p));
  }
  if (rest > 1n && rest <= BigInt(bound) * BigInt(bound)) {
    primes.push({ prime: rest, exponent: 1 });
    rest = 1n;
  }
  return { primes, rest };
}
