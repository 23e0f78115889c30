/** Arithmetic grounds of an exclusion, from scratch. FORMAT.md, section 7; Serre, A Course in Arithmetic, ch. III and IV. */
import { eliminatePositive, rootOf } from './arithmetic.ts';
import type { CheckedLattice } from './lattice.ts';
import { listOf, Rejection, stringIntegerOf, type Json } from './reading.ts';

export function checkDimensionGround(lattice: CheckedLattice, n: number, place: string): void {
  if (n >= lattice.rank) throw new Rejection(place, `n = ${n} is not below the rank ${lattice.rank}`);
}

export function checkDeterminantGround(lattice: CheckedLattice, n: number, place: string): void {
  if (n !== lattice.rank) throw new Rejection(place, 'the determinant speaks at n = rank only');
  if (rootOf(lattice.determinant) ** 2n === lattice.determinant)
    throw new Rejection(place, `${lattice.determinant} is a square`);
}

/** The pivots of the whole form diagonalise the reduced lattice over Q. */
export function checkHilbertGround(lattice: CheckedLattice, n: number, primes: Json | undefined, place: string): void {
  const excess = n - lattice.rank;
  if (excess < 0 || excess > 2) throw new Rejection(place, 'the condition speaks at n = rank, rank + 1, rank + 2 only');
  const list = listOf(primes, `${place}/primes`).map((p, i) => stringIntegerOf(p, `${place}/primes/${i}`));
  if (list.length === 0) throw new Rejection(`${place}/primes`, 'no prime');
  const pivots = eliminatePositive(lattice.gram)!.pivots.map(({ n: a, d: b }) => a * b);
  list.forEach((p, i) => {
    const at = `${place}/primes/${i}`;
    if (!isSmallPrime(p)) throw new Rejection(at, `${p} is not a prime below 2^32`);
    if (i > 0 && p <= list[i - 1]!) throw new Rejection(at, 'not ascending');
    const epsilon = hasse(pivots, p);
    const d = lattice.determinant;
    const holds =
      excess === 0
        ? epsilon === 1 && squareClass(d, p).isSquare
        : excess === 1
          ? epsilon * symbol(squareClass(d, p), squareClass(-1n, p), p) === 1
          : !squareClass(-d, p).isSquare || epsilon === symbol(squareClass(-1n, p), squareClass(-1n, p), p);
    if (holds) throw new Rejection(at, `the condition at ${p} does not fail`);
  });
}

function isSmallPrime(p: bigint): boolean {
  if (p < 2n || p >= 2n ** 32n) return false;
  const n = Number(p);
  for (let d = 2; d * d <= n; d += 1) if (n % d === 0) return false;
  return true;
}

/** The class of a nonzero integer modulo squares of Q_p: parity of its exponent and its unit part modulo p (8 if p = 2). */
interface SquareClass {
  readonly odd: boolean;
  readonly unit: bigint;
  readonly isSquare: boolean;
}

function squareClass(a: bigint, p: bigint): SquareClass {
  let [exponent, unit] = [0, a];
  while (unit % p === 0n) {
    unit /= p;
    exponent += 1;
  }
  return classOf(exponent % 2 === 1, unit, p);
}

function classOf(odd: boolean, unit: bigint, p: bigint): SquareClass {
  const m = p === 2n ? 8n : p;
  const u = ((unit % m) + m) % m;
  return { odd, unit: u, isSquare: !odd && (p === 2n ? u === 1n : quadraticResidue(u, p)) };
}

function quadraticResidue(u: bigint, p: bigint): boolean {
  let [power, base] = [1n, u];
  for (let e = (p - 1n) / 2n; e > 0n; e /= 2n) {
    if (e % 2n === 1n) power = (power * base) % p;
    base = (base * base) % p;
  }
  return power === 1n;
}

function symbol(a: SquareClass, b: SquareClass, p: bigint): number {
  let flips = 0;
  if (p === 2n) {
    const threeModFour = (u: bigint) => (u % 4n === 3n ? 1 : 0);
    const threeOrFive = (u: bigint) => (u === 3n || u === 5n ? 1 : 0);
    flips =
      threeModFour(a.unit) * threeModFour(b.unit) +
      (a.odd ? threeOrFive(b.unit) : 0) +
      (b.odd ? threeOrFive(a.unit) : 0);
  } else {
    if (a.odd && b.odd && p % 4n === 3n) flips += 1;
    if (b.odd && !quadraticResidue(a.unit, p)) flips += 1;
    if (a.odd && !quadraticResidue(b.unit, p)) flips += 1;
  }
  return flips % 2 === 0 ? 1 : -1;
}

/** ε_p = ∏_{i<j} (a_i, a_j)_p, gathered as (a_1 ⋯ a_{j−1}, a_j)_p. */
function hasse(diagonal: readonly bigint[], p: bigint): number {
  let product = squareClass(1n, p);
  let epsilon = 1;
  for (const a of diagonal) {
    const next = squareClass(a, p);
    epsilon *= symbol(product, next, p);
    product = classOf(product.odd !== next.odd, product.unit * next.unit, p);
  }
  return epsilon;
}
