/**
 * F1 under a column a (FORMAT.md, F2): which candidates c have a gap under a, (F(a)·F(c) − T(a, c)²) / d, that is a square. Direct forms
 * compute it; for the others it is reduced modulo products of small primes that do not divide d, where half of the residues are no squares, and integers
 * decide what is left.
 */
import { abs, integerSqrt, inverseModulo } from '@palmette/exact';
import { squareRoot, squaresModulo, type AdmissibleColumns } from './admissible-columns.ts';
import { apply, dot, exactGap, exactProduct, isOddPrime, roundedQuotient, type DualForm } from './dual-form.ts';

export interface UnderColumn {
  /** Turns to the column at this place; true if F(a) = 0. */
  aim(a: number): boolean;
  /** T(a, c) = 0? Asked where F(a) = 0. */
  meets(c: number): boolean;
  /** The y ≥ 0 with y² = gap of c under a, or −1. */
  root(c: number): number;
  /** F(a), and T(a, c). */
  readonly gap: bigint;
  product(c: number): bigint;
}

export function underColumn(form: DualForm, columns: AdmissibleColumns): UnderColumn {
  return form.direct === null ? new SievedUnder(form, columns) : new DirectUnder(form, form.direct, columns);
}

class DirectUnder implements UnderColumn {
  private readonly image: Float64Array;
  private readonly d: number;
  private own = 0;
  constructor(
    private readonly form: DualForm,
    private readonly adjugate: Float64Array,
    private readonly columns: AdmissibleColumns,
  ) {
    this.image = new Float64Array(form.rank);
    this.d = Number(form.determinant);
  }

  aim(a: number): boolean {
    const { rank } = this.form;
    apply(this.adjugate, this.columns.entries, a * rank, rank, this.image);
    this.own = this.columns.gaps[a]!;
    return this.own === 0;
  }

  private t(c: number): number {
    return dot(this.image, this.columns.entries, c * this.form.rank, this.form.rank);
  }

  meets(c: number): boolean {
    return this.t(c) === 0;
  }

  root(c: number): number {
    const t = this.t(c);
    const left = roundedQuotient(this.own, this.columns.gaps[c]!, -t, t, this.d);
    return left < 0 ? -1 : squareRoot(left);
  }

  get gap(): bigint {
    return BigInt(this.own);
  }

  product(c: number): bigint {
    return BigInt(this.t(c));
  }
}

/** Small primes in one modulus, and moduli: each prime halves what is left. */
const PRIMES_IN_MODULUS = 3;
const MODULI = 4;
const FIRST_PRIME = 211;

interface Sieve {
  readonly modulus: number;
  readonly adjugate: Float64Array;
  readonly determinant: number;
  /** 1/d. */
  readonly inverse: number;
  readonly primes: readonly { readonly prime: number; readonly isSquare: Uint8Array }[];
  /** F(c) by place, made when first asked for. */
  gaps: Float64Array | null;
  readonly image: Float64Array;
  own: number;
}

class SievedUnder implements UnderColumn {
  gap = 0n;
  private at = 0;
  private readonly sieves: Sieve[];
  constructor(
    private readonly form: DualForm,
    private readonly columns: AdmissibleColumns,
  ) {
    this.sieves = sievesFor(form);
  }

  private column(k: number): Int32Array {
    return this.columns.entries.subarray(k * this.form.rank, (k + 1) * this.form.rank);
  }

  aim(a: number): boolean {
    this.at = a;
    this.gap = exactGap(this.form, this.column(a));
    for (const sieve of this.sieves) {
      this.turn(sieve, a);
      sieve.own = Number(this.gap % BigInt(sieve.modulus));
    }
    return this.gap === 0n;
  }

  /** adj W·a modulo the sieve's modulus. */
  private turn({ adjugate, modulus, image }: Sieve, a: number): void {
    const { rank } = this.form;
    apply(adjugate, this.columns.entries, a * rank, rank, image);
    for (let i = 0; i < rank; i += 1) image[i]! %= modulus;
  }

  private gapsOf(sieve: Sieve): Float64Array {
    if (sieve.gaps !== null) return sieve.gaps;
    const { rank } = this.form;
    const { modulus } = sieve;
    const gaps = new Float64Array(this.columns.count);
    for (let k = 0; k < gaps.length; k += 1) {
      this.turn(sieve, k);
      gaps[k] = (sieve.determinant - dot(sieve.image, this.columns.entries, k * rank, rank)) % modulus;
    }
    this.turn(sieve, this.at);
    sieve.gaps = gaps;
    return gaps;
  }

  meets(c: number): boolean {
    const { rank } = this.form;
    const [first] = this.sieves;
    if (dot(first!.image, this.columns.entries, c * rank, rank) % first!.modulus !== 0) return false;
    return this.product(c) === 0n;
  }

  root(c: number): number {
    const { rank } = this.form;
    for (const sieve of this.sieves) {
      const { modulus, primes } = sieve;
      const t = dot(sieve.image, this.columns.entries, c * rank, rank) % modulus;
      const left = (sieve.own * this.gapsOf(sieve)[c]! - t * t) % modulus;
      const gap = (((left * sieve.inverse) % modulus) + modulus) % modulus;
      for (const { prime, isSquare } of primes) if (isSquare[gap % prime] === 0) return -1;
    }
    const t = this.product(c);
    const exact = (this.gap * exactGap(this.form, this.column(c)) - t * t) / this.form.determinant;
    const root = integerSqrt(abs(exact));
    return root * root === exact ? Number(root) : -1;
  }

  product(c: number): bigint {
    return exactProduct(this.form, this.column(this.at), this.column(c));
  }
}

function sievesFor(form: DualForm): Sieve[] {
  let prime = FIRST_PRIME - 2;
  const next = (): number => {
    do prime += 2;
    while (!isOddPrime(prime) || form.determinant % BigInt(prime) === 0n);
    return prime;
  };
  return Array.from({ length: MODULI }, () => {
    const primes = Array.from({ length: PRIMES_IN_MODULUS }, next);
    const modulus = primes.reduce((a, b) => a * b, 1);
    const big = BigInt(modulus);
    return {
      modulus,
      adjugate: Float64Array.from(form.adjugate.flat(), (x) => Number(((x % big) + big) % big)),
      determinant: Number(form.determinant % big),
      inverse: Number(inverseModulo(form.determinant, big)!),
      primes: primes.map((p) => ({ prime: p, isSquare: squaresModulo(p) })),
      gaps: null,
      image: new Float64Array(form.rank),
      own: 0,
    };
  });
}
