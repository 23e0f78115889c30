/**
 * Admissible columns, listed again from nothing (rule D, FORMAT.md): entry after entry in the order of the dual form, with the integer
 * F_k ≥ 0 as the only cut. Columns are taken up to sign: the first entry that is not 0 is positive.
 */
import type { DualForm } from './dual-form.ts';
import type { Int } from './int-kinds.ts';
import { NotChecked } from './reading.ts';

export interface DualColumns {
  readonly count: number;
  /** Admissible columns, kept or not. */
  readonly admissible: number;
  /** Entries by rows of W, column k at k·rank. */
  readonly entries: Int32Array;
  /** F(c) = det(W − c·cᵀ). */
  readonly gaps: readonly Int[];
}

/** `unit`: F(c) = 0; `square`: F(c) is a square. */
export type Wanted = 'all' | 'unit' | 'square';

/** Columns that are kept at most, and values that are tried at most. */
export const MOST_COLUMNS = 6_000_000;
const MOST_STEPS = 4_000_000_000;

export function listColumns(form: DualForm, wanted: Wanted): DualColumns {
  const { rank, kind, order, minors, weights, quotient } = form;
  const { zero, one } = kind;
  const value: Int[] = new Array<Int>(rank).fill(zero);
  const centre: Int[] = new Array<Int>(rank).fill(zero);
  const low: Int[] = new Array<Int>(rank).fill(zero);
  const gap: Int[] = [one];
  const allZero: boolean[] = [true];
  const found = new Found(rank);
  let steps = 0;
  let admissible = 0;

  /** Range of entry k: |d_k·c − centre| ≤ √(d_(k+1)·F_k), begun at its upper end. */
  const open = (k: number): void => {
    let sum = zero;
    const row = weights[k]!;
    for (let i = 0; i < k; i += 1) sum += row[i]! * value[i]!;
    centre[k] = sum;
    const d = minors[k]!;
    const reach = kind.rootAbove(minors[k + 1]! * gap[k]!);
    value[k] = kind.floorQuotient(sum + reach, d) + one;
    low[k] = allZero[k]! ? zero : -kind.floorQuotient(reach - sum, d);
  };
  const finish = (): void => {
    if (allZero[rank]!) return;
    const last = gap[rank]!;
    if (wanted === 'unit' && last !== zero) return;
    admissible += 1;
    if (wanted === 'square' && form.squareRoot(last) < zero) return;
    found.add(order, value, last);
  };

  if (rank === 0) return { count: 0, admissible: 0, entries: new Int32Array(0), gaps: [] };
  open(0);
  for (let k = 0; k >= 0;) {
    value[k]! -= one;
    steps += 1;
    if (steps > MOST_STEPS) throw new NotChecked(`more than ${MOST_STEPS} values to try for the admissible columns`);
    if (value[k]! < low[k]!) {
      k -= 1;
      continue;
    }
    const u = minors[k]! * value[k]! - centre[k]!;
    const rest = quotient(minors[k + 1]!, gap[k]!, u, u, minors[k]!);
    if (rest < zero) continue;
    gap[k + 1] = rest;
    allZero[k + 1] = allZero[k]! && value[k] === zero;
    if (k + 1 === rank) finish();
    else {
      k += 1;
      open(k);
    }
  }
  return { count: found.count, admissible, entries: found.entries, gaps: found.gaps };
}

class Found {
  count = 0;
  entries = new Int32Array(1024);
  readonly gaps: Int[] = [];
  constructor(private readonly rank: number) {}

  add(order: readonly number[], value: readonly Int[], gap: Int): void {
    const { rank } = this;
    const at = this.count * rank;
    if (this.count >= MOST_COLUMNS) throw new NotChecked(`more than ${MOST_COLUMNS} admissible columns`);
    if (at + rank > this.entries.length) {
      const grown = new Int32Array(2 * this.entries.length + rank);
      grown.set(this.entries);
      this.entries = grown;
    }
    for (let i = 0; i < rank; i += 1) {
      const x = Number(value[i]!);
      if (Math.abs(x) >= 2 ** 31) throw new NotChecked('an entry of a column is above 2^31');
      this.entries[at + order[i]!] = x;
    }
    this.gaps.push(gap);
    this.count += 1;
  }
}

/** Dimension of the span of the columns. */
export function spanOf(form: DualForm, columns: DualColumns): number {
  const basis: { lead: number; row: bigint[] }[] = [];
  for (let k = 0; k < columns.count && basis.length < form.rank; k += 1) {
    let row = Array.from(columns.entries.subarray(k * form.rank, (k + 1) * form.rank), BigInt);
    for (const { lead, row: other } of basis) {
      const [a, b] = [row[lead]!, other[lead]!];
      if (a !== 0n) row = row.map((x, j) => x * b - other[j]! * a);
    }
    const lead = row.findIndex((x) => x !== 0n);
    if (lead >= 0) basis.push({ lead, row });
  }
  return basis.length;
}
