/** For tests: small integers and forms that look random and are the same in every run. */
import { determinant, multiply, transpose, type BigMatrix } from '@palmette/exact';

/** A source of integers from low to high, from a fixed seed (multiplicative congruential, Lehmer). */
export type SeededIntegers = (low: number, high: number) => number;

export function seededIntegers(seed: number): SeededIntegers {
  let state = seed;
  return (low, high) => {
    state = (state * 48_271) % 2_147_483_647;
    return low + (state % (high - low + 1));
  };
}

/** B·Bᵀ for a rank × n matrix B with entries from −2 to 2, drawn until it is positive definite; rank ≤ n. */
export function seededProduct(random: SeededIntegers, rank: number, n: number): BigMatrix {
  for (;;) {
    const b = Array.from({ length: rank }, () => Array.from({ length: n }, () => BigInt(random(-2, 2))));
    const gram = multiply(b, transpose(b));
    if (determinant(gram) !== 0n) return gram;
  }
}
