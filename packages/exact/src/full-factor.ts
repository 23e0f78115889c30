/**
 * All prime factors of an integer, each proved prime: trial division, then Pollard's rho in Brent's form (BIT 20 (1980)) for what the strong
 * test finds composite. Bounded; what is not finished within the bounds is null, never a guess.
 */
import { abs, gcd, powerModulo } from './integers.ts';
import { trialFactor } from './factor.ts';

/** Below this the strong test to twelve bases is a proof; the bound is the least number that passes it without being prime. */
export const PROVABLE_PRIME = 318_665_857_834_031_151_167_461n;
const TRIAL_BOUND = 4_096;
const RHO_STEPS = 2_000_000;

/** @returns proved primes, each once, ascending; null if a factor is above the bound or the steps do not suffice */
export function primeFactors(a: bigint): bigint[] | null {
  const { primes, rest } = trialFactor(a, TRIAL_BOUND);
  const found = new Set(primes.map(({ prime }) => prime));
  const open = rest === 1n ? [] : [rest];
  while (open.length > 0) {
    const n = open.pop()!;
    if (n >= PROVABLE_PRIME) return null;
    if (isPrime(n)) {
      found.add(n);
      continue;
    }
    const factor = rho(n);
    if (factor === null) return null;
    open.push(factor, n / factor);
  }
  return [...found].sort((x, y) => (x < y ? -1 : 1));
}

const BASES = [2n, 3n, 5n, 7n, 11n, 13n, 17n, 19n, 23n, 29n, 31n, 37n];

/**
 * The strong test to the twelve bases 2, …, 37, which no composite number below the bound passes (Sorenson–Webster, Math. Comp. 86 (2017)).
 * @param n odd, 37 < n < PROVABLE_PRIME
 */
function isPrime(n: bigint): boolean {
  let [odd, twos] = [n - 1n, 0];
  for (; odd % 2n === 0n; odd /= 2n) twos += 1;
  return BASES.every((base) => {
    let x = powerModulo(base, odd, n);
    for (let i = 0; i < twos && x !== 1n && x !== n - 1n; i += 1) {
      x = (x * x) % n;
      if (x === 1n) return false;
    }
    return x === 1n || x === n - 1n;
  });
}

/** A factor of a composite n, or null. */
function rho(n: bigint): bigint | null {
  for (let c = 1n, steps = 0; steps < RHO_STEPS; c += 1n) {
    let [y, product] = [2n, 1n];
    let [saved, batch] = [2n, 1];
    for (;;) {
      const x = y;
      for (let i = 0; i < batch; i += 1) y = (y * y + c) % n;
      let g = 1n;
      for (let k = 0; k < batch && g === 1n; k += 128) {
        saved = y;
        for (let i = 0; i < Math.min(128, batch - k); i += 1) {
          y = (y * y + c) % n;
          product = (product * abs(x - y)) % n;
        }
        g = gcd(product, n);
      }
      steps += 2 * batch;
      if (g === n) {
        // the batch went too far: one step at a time
        y = saved;
        do {
          y = (y * y + c) % n;
          g = gcd(abs(x - y), n);
        } while (g === 1n);
        if (g === n) break;
      }
      if (g !== 1n) return g;
      if (steps > RHO_STEPS) return null;
      batch *= 2;
    }
  }
  return null;
}
