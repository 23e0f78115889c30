/**
 * The admissible columns of a working Gram W (FORMAT.md, rule D): c ≠ 0 up to sign with cᵀW⁻¹c ≤ 1, or = 1.
 * Fincke–Pohst (Math. Comp. 44 (1985)) along the rows: with r*_k the part of row k outside the span of the rows before it and
 * D_k its squared length, cᵀW⁻¹c = Σ (c_k − Σ_i μ_ki c_i)² / D_k, where row k − Σ μ_ki row i = r*_k.
 *
 * Doubles cut a branch only on the safe side. Every μ_ki and 1/D_k is a quotient of exact integers, off by a factor of at most 1 + 2^−51.
 * With |c_i| ≤ √W_ii the computed c_k − Σ μ_ki c_i is off by at most E_k = (r + 8)·2^−51·(√W_kk + Σ |μ_ki|·√W_ii); for an admissible c its
 * true size is at most √D_k, so the computed partial sums exceed the true ones by at most
 * δ = Σ ((2·√D_k·E_k + E_k²) / D_k + 2^−48). Branches are cut above 1 + 2δ only. A column whose computed value is within 2δ of 1 is decided by
 * integers.
 */
import { abs, integerSqrt } from '@palmette/exact';
import type { DualForm } from './dual-form.ts';
import { exactGap } from './dual-form.ts';
import { smallestResidual } from './order.ts';

/** Which admissible columns are kept: all; those with cᵀW⁻¹c = 1; those whose gap F(c) is a square. */
export type Kept = 'all' | 'unit' | 'square';

export interface AdmissibleColumns {
  /** Columns that are kept, and how many are admissible (for `unit`: how many have cᵀW⁻¹c = 1). */
  readonly count: number;
  readonly admissible: number;
  /** Entries by rows of W: column j at j·rank. */
  readonly entries: Int32Array;
  /** F(c) = d·(1 − cᵀW⁻¹c), where the form is direct; else empty. */
  readonly gaps: Float64Array;
  /** The root of F(c) where that is a square, else −1; empty unless squares were asked for. */
  readonly roots: Float64Array;
  /** Values that were tried. */
  readonly steps: number;
}

interface Profile {
  readonly order: readonly number[];
  readonly mu: readonly Float64Array[];
  /** D_k and E_k. */
  readonly residual: Float64Array;
  readonly error: Float64Array;
  readonly slack: number;
}

/** Above this rank the profile is not computed: it costs the cube of the rank. */
export const MAX_RANK = 160;
const UNIT = 2 ** -51;
const LARGEST_SLACK = 1e-3;

/** @returns null where doubles are not precise enough for the form */
function profile(form: DualForm): Profile | null {
  const { gram, rank } = form;
  const order = smallestResidual(gram);
  const m = order.map((v, k) => [...order.map((w) => gram[v]![w]!), ...order.map((_, j) => (j === k ? 1n : 0n))]);
  let before = 1n;
  const residual = new Float64Array(rank);
  const mu: Float64Array[] = [];
  const error = new Float64Array(rank);
  let slack = 0;
  for (let k = 0; k < rank; k += 1) {
    const pivot = m[k]![k]!;
    residual[k] = Number(pivot) / Number(before);
    mu.push(Float64Array.from({ length: k }, (_, i) => -(Number(m[k]![rank + i]!) / Number(before))));
    const size = mu[k]!.reduce(
      (sum, x, i) => sum + Math.abs(x) * (form.reach[order[i]!]! + 1),
      form.reach[order[k]!]! + 1,
    );
    error[k] = (rank + 8) * UNIT * size;
    slack += (2 * Math.sqrt(residual[k]!) * error[k]! + error[k]! * error[k]!) / residual[k]! + 8 * UNIT;
    for (let i = k + 1; i < rank; i += 1) {
      const factor = m[i]![k]!;
      for (let j = k + 1; j <= rank + i; j += 1) m[i]![j] = (pivot * m[i]![j]! - factor * m[k]![j]!) / before;
    }
    before = pivot;
  }
  return slack * 2 < LARGEST_SLACK ? { order, mu, residual, error, slack } : null;
}

export interface ListingBounds {
  readonly steps: number;
  readonly vectors: number;
}

/** @returns null where doubles are not precise enough or a bound is passed */
export function admissibleColumns(form: DualForm, kind: Kept, bounds: ListingBounds): AdmissibleColumns | null {
  const { rank } = form;
  if (rank > MAX_RANK) return null;
  const kept = new KeptColumns(form, kind);
  if (rank === 0) return kept.finish(0);
  const unit = kind === 'unit';
  const at = profile(form);
  if (at === null) return null;
  const { order, mu, residual, error } = at;
  const slack = 2 * at.slack;
  const limit = 1 + slack;
  const c = new Float64Array(rank);
  const centre = new Float64Array(rank);
  const high = new Float64Array(rank);
  const partial = new Float64Array(rank + 1);
  const leading = new Uint8Array(rank + 1).fill(1);
  const column = new Int32Array(rank);
  let steps = 0;
  let depth = 0;
  open(0);
  while (depth >= 0) {
    if (c[depth]! > high[depth]!) {
      depth -= 1;
      if (depth >= 0) c[depth]! += 1;
      continue;
    }
    steps += 1;
    if (steps > bounds.steps) return null;
    const t = c[depth]! - centre[depth]!;
    const sum = partial[depth]! + (t * t) / residual[depth]!;
    if (sum > limit) {
      if (t > 0) high[depth] = -Infinity;
      else c[depth]! += 1;
      continue;
    }
    if (depth + 1 < rank) {
      partial[depth + 1] = sum;
      leading[depth + 1] = leading[depth] === 1 && c[depth] === 0 ? 1 : 0;
      depth += 1;
      open(depth);
      continue;
    }
    if ((!unit || sum > 1 - slack) && !(leading[depth] === 1 && c[depth] === 0)) {
      for (let k = 0; k < rank; k += 1) column[order[k]!] = c[k]!;
      kept.offer(column, sum < 1 - slack);
      if (kept.count > bounds.vectors) return null;
    }
    c[depth]! += 1;
  }
  return kept.finish(steps);

  /** Range of entry k; the first nonzero entry is positive. */
  function open(k: number): void {
    const row = mu[k]!;
    let s = 0;
    for (let i = 0; i < k; i += 1) s += row[i]! * c[i]!;
    centre[k] = s;
    const root = Math.sqrt(Math.max(0, limit - partial[k]!) * residual[k]!) * (1 + 1e-9) + 2 * error[k]! + 1e-9;
    const cap = form.reach[order[k]!]!;
    high[k] = Math.min(cap, Math.floor(s + root));
    c[k] = leading[k] === 1 ? 0 : Math.max(-cap, Math.ceil(s - root));
  }
}

/** Columns as they are found, decided by integers where doubles leave a doubt. */
class KeptColumns {
  count = 0;
  private admissible = 0;
  private entries = new Int32Array(1024);
  private gaps = new Float64Array(128);
  private roots = new Float64Array(128);
  private readonly squares: SquareGaps | null;
  constructor(
    private readonly form: DualForm,
    private readonly kind: Kept,
  ) {
    this.squares = kind === 'square' && form.direct === null ? new SquareGaps(form) : null;
  }

  /** @param inside the computed value is so far below 1 that the true one is, too */
  offer(c: Int32Array, inside: boolean): void {
    const { rank, direct } = this.form;
    const unit = this.kind === 'unit';
    let gap = 0;
    if (direct !== null) {
      gap = this.directGap(c, direct);
      if (gap < 0 || (unit && gap !== 0)) return;
    } else if (unit) {
      if (!this.gapIsZero(c)) return;
    } else if (!inside && !this.gapIsZero(c) && exactGap(this.form, c) < 0n) return;
    this.admissible += 1;
    let root = -1;
    if (this.kind === 'square') {
      root = this.squares === null ? squareRoot(gap) : this.squares.root(c);
      if (root < 0) return;
    }
    if ((this.count + 1) * rank > this.entries.length) this.entries = grown(this.entries, Int32Array);
    if (this.count + 1 > this.gaps.length) {
      this.gaps = grown(this.gaps, Float64Array);
      this.roots = grown(this.roots, Float64Array);
    }
    this.entries.set(c, this.count * rank);
    this.gaps[this.count] = gap;
    this.roots[this.count] = root;
    this.count += 1;
  }

  private directGap(c: Int32Array, adjugate: Float64Array): number {
    const { rank } = this.form;
    let sum = 0;
    for (let i = 0, at = 0; i < rank; i += 1) {
      let z = 0;
      for (let j = 0; j < rank; j += 1, at += 1) z += adjugate[at]! * c[j]!;
      sum += c[i]! * z;
    }
    return Number(this.form.determinant) - sum;
  }

  /** Every column that is offered has |F| ≤ 2d. */
  private gapIsZero(c: Int32Array): boolean {
    const { rank, residues, determinant } = this.form;
    return residues.every(({ modulus, adjugate }) => {
      let sum = 0;
      for (let i = 0, at = 0; i < rank; i += 1) {
        let z = 0;
        for (let j = 0; j < rank; j += 1, at += 1) z += adjugate[at]! * c[j]!;
        sum += c[i]! * (z % modulus);
      }
      return (sum - Number(determinant % BigInt(modulus))) % modulus === 0;
    });
  }

  finish(steps: number): AdmissibleColumns {
    const { rank, direct } = this.form;
    return {
      count: this.count,
      admissible: this.admissible,
      entries: this.entries.slice(0, this.count * rank),
      gaps: direct === null ? new Float64Array(0) : this.gaps.slice(0, this.count),
      roots: this.kind === 'square' ? this.roots.slice(0, this.count) : new Float64Array(0),
      steps,
    };
  }
}

function grown<T extends Int32Array | Float64Array>(old: T, make: new (length: number) => T): T {
  const out = new make(old.length * 2);
  out.set(old);
  return out;
}

/** The y ≥ 0 with y² = a, or −1. For 0 ≤ a < 2^52 the rounded root of a square is that root. */
export function squareRoot(a: number): number {
  const y = Math.round(Math.sqrt(a));
  return y * y === a ? y : -1;
}

/** 1 at the squares modulo m, 0 elsewhere. */
export function squaresModulo(m: number): Uint8Array {
  const table = new Uint8Array(m);
  for (let x = 0; x < m; x += 1) table[(x * x) % m] = 1;
  return table;
}

/** Moduli with few squares; their product is below 2^26. */
const SIEVE = [64, 63, 65, 11, 17];

/**
 * Which gaps are squares, where the form is not direct: residues modulo a product of small moduli throw most of the others out,
 * integers decide the rest.
 */
class SquareGaps {
  private readonly modulus = SIEVE.reduce((a, b) => a * b, 1);
  private readonly adjugate: Float64Array;
  private readonly determinant: number;
  private readonly tables: Uint8Array[];
  constructor(private readonly form: DualForm) {
    const big = BigInt(this.modulus);
    this.adjugate = Float64Array.from(form.adjugate.flat(), (x) => Number(((x % big) + big) % big));
    this.determinant = Number(form.determinant % big);
    this.tables = SIEVE.map(squaresModulo);
  }

  /** The y ≥ 0 with y² = F(c), or −1. */
  root(c: Int32Array): number {
    const { modulus, adjugate, tables, form } = this;
    const { rank } = form;
    let sum = 0;
    for (let i = 0; i < rank; i += 1) {
      if (c[i] === 0) continue;
      let z = 0;
      for (let j = 0, at = i * rank; j < rank; j += 1, at += 1) z += adjugate[at]! * c[j]!;
      sum += c[i]! * (z % modulus);
    }
    const gap = (((this.determinant - sum) % modulus) + modulus) % modulus;
    for (let i = 0; i < SIEVE.length; i += 1) if (tables[i]![gap % SIEVE[i]!] === 0) return -1;
    const exact = exactGap(form, c);
    const root = integerSqrt(abs(exact));
    return root * root === exact ? Number(root) : -1;
  }
}
