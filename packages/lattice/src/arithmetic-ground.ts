/**
 * Grounds that exclude an embedding in Z^n before any search: dimension, determinant, Hilbert symbols.
 * Hasse–Minkowski; Serre, A Course in Arithmetic, ch. IV. The statements and their proofs: FORMAT.md, section 7.
 */
import { eliminateSymmetric, hilbertSymbol, isLocalSquare, isSquare, modulo, trialFactor } from '@palmette/exact';
import { reducedBasis, type Lattice } from './build.ts';

export type ArithmeticGround =
  | { readonly ground: 'dimension' }
  | { readonly ground: 'determinant' }
  /** Every listed prime fails; all are below 2^32, so that a checker can prove them prime by division. */
  | { readonly ground: 'hilbert'; readonly primes: string[] };

const PRIME_BOUND = 2n ** 32n;

/** Why the lattice cannot embed in Z^n by arithmetic alone, or null if arithmetic does not say so. */
export function arithmeticGround(lattice: Lattice, n: number): ArithmeticGround | null {
  const excess = n - lattice.rank;
  if (excess < 0) return { ground: 'dimension' };
  if (excess > 2 || lattice.rank === 0) return null;
  if (excess === 0 && !isSquare(lattice.determinant)) return { ground: 'determinant' };
  const primes = failingPrimes(lattice, excess);
  return primes.length > 0 ? { ground: 'hilbert', primes: primes.map(String) } : null;
}

function failingPrimes(lattice: Lattice, excess: number): bigint[] {
  const d = lattice.determinant;
  const candidates = new Set([
    2n,
    ...trialFactor(d)
      .primes.map(({ prime }) => prime)
      .filter((p) => p < PRIME_BOUND),
  ]);
  const pivots = eliminateSymmetric(reducedBasis(lattice).gram).pivots.map((pivot) => ({ n: pivot.n, d: pivot.d }));
  return [...candidates].sort((a, b) => (a < b ? -1 : 1)).filter((p) => fails(p, d, hasseInvariant(pivots, p), excess));
}

function fails(p: bigint, d: bigint, epsilon: 1 | -1, excess: number): boolean {
  if (excess === 0) return epsilon !== 1;
  if (excess === 1) return epsilon * hilbertSymbol(d, -1n, p) !== 1;
  return isLocalSquare(-d, p) && epsilon !== hilbertSymbol(-1n, -1n, p);
}

/** ε_p = ∏_{i<j} (a_i, a_j)_p = ∏_j (a_1 ⋯ a_{j−1}, a_j)_p, each a kept as one small integer of its square class in Q_p. */
function hasseInvariant(pivots: readonly { readonly n: bigint; readonly d: bigint }[], p: bigint): 1 | -1 {
  let product = 1n;
  let epsilon = 1;
  for (const pivot of pivots) {
    const a = smallRepresentative(pivot.n * pivot.d, p);
    epsilon *= hilbertSymbol(product, a, p);
    product = smallRepresentative(product * a, p);
  }
  return epsilon === 1 ? 1 : -1;
}

/** An integer below 8p (p = 2: below 16) in the same square class of Q_p. */
function smallRepresentative(a: bigint, p: bigint): bigint {
  let exponent = 0;
  let unit = a;
  for (; unit % p === 0n; exponent += 1) unit /= p;
  const residue = modulo(unit, p === 2n ? 8n : p);
  return exponent % 2 === 0 ? residue : residue * p;
}
