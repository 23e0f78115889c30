/**
 * The dual of a working Gram W, as the listing of admissible columns and the trees over them read it.
 *
 * Everything that decides is an integer: d = det W, adj W, T(c, c') = cᵀ(adj W)c' and F(c) = d − T(c, c) = det(W − c·cᵀ).
 * For admissible c and c' Cauchy–Schwarz gives |T(c, c')| ≤ d. Two ways to compute T:
 * * direct, in doubles, where every partial sum is proved to stay below 2^53;
 * * modulo some primes below 2^26 whose product exceeds 4d²: enough to tell whether a number of size at most 2d² is 0.
 */
import { integerSqrt, inverse, type ReadonlyBigMatrix } from '@palmette/exact';

export interface Residues {
  readonly modulus: number;
  /** adj W modulo the modulus, row after row. */
  readonly adjugate: Float64Array;
}

export interface DualForm {
  readonly rank: number;
  readonly gram: ReadonlyBigMatrix;
  readonly determinant: bigint;
  /** Largest size of each entry of an admissible column: the root of W_ii, rounded down. */
  readonly reach: readonly number[];
  /** adj W in doubles, row after row, where T is exact in doubles and d is below 2^45; else null. */
  readonly direct: Float64Array | null;
  readonly residues: readonly Residues[];
  readonly adjugate: ReadonlyBigMatrix;
}

/** With d below this, (p·a + q·b) / e for sizes up to d rounds to the integer that it is known to be: see `roundedQuotient`. */
const DIRECT_BOUND = 2n ** 45n;
const SAFE = 2n ** 53n;
/** Entries below this times residues below 2^26, summed over 2,000 rows at most, stay below 2^53. */
const ENTRY_BOUND = 2n ** 15n;
const PRIME_BITS = 26;

/**
 * @param directBelow determinants from here on go by residues
 * @returns null where an entry of a column could be too big for the residues to be exact
 */
export function dualForm(gram: ReadonlyBigMatrix, directBelow = DIRECT_BOUND): DualForm | null {
  const rank = gram.length;
  const reach = gram.map((row, i) => integerSqrt(row[i]!));
  const { numerator: adjugate, denominator: determinant } = inverse(gram);
  const exact = determinant < directBelow && sumsStayExact(reach, adjugate, determinant);
  if (!exact && reach.some((x) => x >= ENTRY_BOUND)) return null;
  return {
    rank,
    gram,
    determinant,
    reach: reach.map(Number),
    direct: exact ? Float64Array.from(adjugate.flat(), Number) : null,
    residues: exact ? [] : residuesOf(adjugate, determinant),
    adjugate,
  };
}

/**
 * |(adj W·c)_i| ≤ d·√(W⁻¹)_ii·√(cᵀW⁻¹c) ≤ √(d·adj_ii), and |c_i| ≤ √W_ii. So both the sums that give adj W·c and those that
 * give T are bounded by sums of products of these.
 */
function sumsStayExact(reach: readonly bigint[], adjugate: ReadonlyBigMatrix, determinant: bigint): boolean {
  let outer = 0n;
  for (const [i, row] of adjugate.entries()) {
    const inner = row.reduce((sum, x, j) => sum + (x < 0n ? -x : x) * (reach[j]! + 1n), 0n);
    if (inner >= SAFE) return false;
    outer += (integerSqrt(determinant * row[i]!) + 1n) * (reach[i]! + 1n);
  }
  return outer < SAFE;
}

function residuesOf(adjugate: ReadonlyBigMatrix, determinant: bigint): Residues[] {
  const out: Residues[] = [];
  let product = 1n;
  for (let p = 2 ** PRIME_BITS - 1; product <= 4n * determinant * determinant; p -= 2) {
    if (!isOddPrime(p)) continue;
    const modulus = BigInt(p);
    product *= modulus;
    out.push({
      modulus: p,
      adjugate: Float64Array.from(adjugate.flat(), (x) => Number(((x % modulus) + modulus) % modulus)),
    });
  }
  return out;
}

/** @param n odd, below 2^26 */
export function isOddPrime(n: number): boolean {
  for (let d = 3; d * d <= n; d += 2) if (n % d === 0) return false;
  return true;
}

/** F(c) exactly. @param c by rows of W */
export function exactGap(form: DualForm, c: ArrayLike<number>): bigint {
  return form.determinant - exactProduct(form, c, c);
}

/** T(c, b) exactly. */
export function exactProduct(form: DualForm, c: ArrayLike<number>, b: ArrayLike<number>): bigint {
  let sum = 0n;
  for (let i = 0; i < form.rank; i += 1) {
    if (c[i] === 0) continue;
    let z = 0n;
    const row = form.adjugate[i]!;
    for (let j = 0; j < form.rank; j += 1) if (b[j] !== 0) z += row[j]! * BigInt(b[j]!);
    sum += BigInt(c[i]!) * z;
  }
  return sum;
}

/** 1.5·2^52: sums beyond it have no digits after the point. */
const ROUND = 6755399441055744;

/**
 * (p·a + q·b) / e, known to be an integer, for integers of size at most e, e below 2^45. *Proof.* Each product and the sum is off by a
 * factor 1 + 2^−53, so the quotient is off by less than 4·2^−53·2e < 2^−4; the nearest integer is the one known.
 */
export function roundedQuotient(p: number, a: number, q: number, b: number, e: number): number {
  return (p * a + q * b) / e + ROUND - ROUND;
}

/** (adj W)·c into `image`. */
export function apply(
  adjugate: Float64Array,
  entries: Int32Array,
  at: number,
  rank: number,
  image: Float64Array,
): void {
  image.fill(0);
  for (let j = 0; j < rank; j += 1) {
    const x = entries[at + j]!;
    if (x === 0) continue;
    // adj W is symmetric: its row j is its column j
    for (let i = 0, from = j * rank; i < rank; i += 1, from += 1) image[i]! += adjugate[from]! * x;
  }
}

export function dot(image: Float64Array, entries: Int32Array, at: number, rank: number): number {
  let sum = 0;
  for (let i = 0; i < rank; i += 1) sum += image[i]! * entries[at + i]!;
  return sum;
}
