/**
 * Exact symmetric elimination: Q = LDLᵀ over the rationals with rows taken in order of fewest entries, so that a tree
 * of thousands of vertices is eliminated from its leaves without fill-in. Gives inertia, pivots and the kernel.
 */
import Fraction from 'fraction.js';
import { gcd } from './integers.ts';
import type { ReadonlyBigMatrix } from './matrix.ts';

export interface Elimination {
  readonly positive: number;
  readonly negative: number;
  readonly zero: number;
  /** Pivots d_1, d_2, … of D in order of elimination; their product is the determinant if `zero` is 0. */
  readonly pivots: readonly Fraction[];
  /** For each pivot its row at that moment: the coefficients of the rows that were still to come. */
  readonly steps: readonly {
    readonly row: number;
    readonly pivot: Fraction;
    readonly others: ReadonlyMap<number, Fraction>;
  }[];
  /** Rows that were zero when everything else was eliminated. */
  readonly free: readonly number[];
  /** True if a pair of rows had to be mixed (only indefinite forms): then `steps` say nothing about the kernel. */
  readonly mixed: boolean;
}

/** Eliminates a symmetric integer matrix. */
export function eliminateSymmetric(matrix: ReadonlyBigMatrix): Elimination {
  const rows: Map<number, Fraction>[] = matrix.map((row) => {
    const map = new Map<number, Fraction>();
    row.forEach((x, j) => {
      if (x !== 0n) map.set(j, new Fraction(x));
    });
    return map;
  });
  const left = new Set(rows.keys());
  const steps: { row: number; pivot: Fraction; others: Map<number, Fraction> }[] = [];
  let [positive, negative] = [0, 0];
  let mixed = false;
  const add = (i: number, j: number, x: Fraction) => {
    const sum = (rows[i]!.get(j) ?? new Fraction(0)).add(x);
    if (sum.n === 0n) rows[i]!.delete(j);
    else rows[i]!.set(j, sum);
  };
  const queue = new DegreeQueue(rows);
  for (;;) {
    let pivotRow = queue.take((i) => left.has(i) && rows[i]!.has(i));
    if (pivotRow === undefined) {
      const crossed = [...left].find((i) => rows[i]!.size > 0);
      if (crossed === undefined) break;
      // every diagonal entry left is 0: add row j to row i to get the diagonal entry 2·Q_ij
      const j = rows[crossed]!.keys().next().value!;
      mixed = true;
      for (const [k, x] of [...rows[j]!]) add(crossed, k, x);
      for (const [k, x] of [...rows[crossed]!]) if (k !== crossed) rows[k]!.set(crossed, x);
      const diagonal = rows[crossed]!.get(crossed) ?? new Fraction(0);
      rows[crossed]!.set(crossed, diagonal.add(rows[crossed]!.get(j) ?? new Fraction(0)));
      pivotRow = crossed;
    }
    const pivot = rows[pivotRow]!.get(pivotRow)!;
    const others = new Map(rows[pivotRow]!);
    others.delete(pivotRow);
    if (pivot.s > 0n) positive += 1;
    else negative += 1;
    left.delete(pivotRow);
    const list = [...others];
    for (const [i, x] of list) {
      rows[i]!.delete(pivotRow);
      const factor = x.div(pivot).neg();
      for (const [j, y] of list) add(i, j, factor.mul(y));
      queue.put(i);
    }
    steps.push({ row: pivotRow, pivot, others });
  }
  return {
    positive,
    negative,
    zero: left.size,
    pivots: steps.map((s) => s.pivot),
    steps,
    free: [...left].sort((a, b) => a - b),
    mixed,
  };
}

/** Rows by number of entries, fewest first; entries that are out of date are passed over. */
class DegreeQueue {
  private readonly buckets: number[][] = [];
  constructor(private readonly rows: readonly ReadonlyMap<number, unknown>[]) {
    for (let i = rows.length - 1; i >= 0; i -= 1) this.put(i);
  }

  put(i: number): void {
    const degree = this.rows[i]!.size;
    while (this.buckets.length <= degree) this.buckets.push([]);
    this.buckets[degree]!.push(i);
  }

  take(wanted: (i: number) => boolean): number | undefined {
    for (const [degree, bucket] of this.buckets.entries()) {
      while (bucket.length > 0) {
        const i = bucket.pop()!;
        if (this.rows[i]!.size === degree && wanted(i)) return i;
      }
    }
    return undefined;
  }
}

/** Primitive integer vectors that span the kernel over the rationals (not necessarily all integer vectors of it). */
export function rationalKernel(elimination: Elimination, size: number): bigint[][] {
  return elimination.free.map((free) => {
    const x = new Map<number, Fraction>([[free, new Fraction(1)]]);
    for (const { row, pivot, others } of elimination.steps.toReversed()) {
      let sum = new Fraction(0);
      for (const [j, a] of others) {
        const value = x.get(j);
        if (value !== undefined) sum = sum.add(a.mul(value));
      }
      if (sum.n !== 0n) x.set(row, sum.div(pivot).neg());
    }
    let denominator = 1n;
    for (const value of x.values()) denominator = (denominator / gcd(denominator, value.d)) * value.d;
    const vector = new Array<bigint>(size).fill(0n);
    for (const [i, value] of x) vector[i] = (value.s * value.n * denominator) / value.d;
    const content = vector.reduce(gcd, 0n);
    return vector.map((v) => v / content);
  });
}
