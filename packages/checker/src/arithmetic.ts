/** The few lines of exact arithmetic that the checker needs, on bigint. */

export type Matrix = readonly (readonly bigint[])[];

/** A fraction n/d with d > 0 in lowest terms. */
export interface Ratio {
  readonly n: bigint;
  readonly d: bigint;
}

export function gcdOf(a: bigint, b: bigint): bigint {
  let [x, y] = [a < 0n ? -a : a, b < 0n ? -b : b];
  while (y > 0n) [x, y] = [y, x % y];
  return x;
}

export function ratio(n: bigint, d: bigint): Ratio {
  const g = gcdOf(n, d) * (d < 0n ? -1n : 1n);
  return { n: n / g, d: d / g };
}

/** Largest s with s² ≤ a: Newton's iteration from a guess in doubles, then the last step exactly. */
export function rootOf(a: bigint): bigint {
  if (a < 2n) return a;
  const guess = Math.sqrt(Number(a));
  let s = Number.isFinite(guess) ? BigInt(Math.floor(guess)) : 1n << BigInt(a.toString(2).length >> 1);
  for (let moved = true; moved;) {
    const next = (s + a / s) >> 1n;
    moved = next - s > 1n || s - next > 1n;
    s = next;
  }
  while (s * s > a) s -= 1n;
  while ((s + 1n) * (s + 1n) <= a) s += 1n;
  return s;
}

/** Product of integer matrices that skips zeros of both factors. */
export function times(a: Matrix, b: Matrix): bigint[][] {
  const sparse = b.map((row) => row.flatMap((x, j): [number, bigint][] => (x === 0n ? [] : [[j, x]])));
  const width = b[0]?.length ?? 0;
  return a.map((row) => {
    const out = new Array<bigint>(width).fill(0n);
    row.forEach((x, k) => {
      if (x !== 0n) for (const [j, y] of sparse[k]!) out[j]! += x * y;
    });
    return out;
  });
}

export function turned(m: Matrix, columns = m[0]?.length ?? 0): bigint[][] {
  return Array.from({ length: columns }, (_, j) => m.map((row) => row[j]!));
}

export interface Elimination {
  /** Rows that gave a pivot, and the pivots. */
  readonly rows: readonly number[];
  readonly pivots: readonly Ratio[];
  /** Rows that became zero. */
  readonly zero: readonly number[];
}

/**
 * LDLᵀ of a symmetric matrix with positive pivots only: null if it is not positive semidefinite. The row with fewest
 * entries goes first, so that trees do not fill in. (A zero diagonal entry with a nonzero row is not semidefinite.)
 */
export function eliminatePositive(m: Matrix): Elimination | null {
  const rows = m.map(
    (row) => new Map(row.flatMap((x, j): [number, Ratio][] => (x === 0n ? [] : [[j, { n: x, d: 1n }]]))),
  );
  const open = new Set(rows.keys());
  const order: number[] = [];
  const pivots: Ratio[] = [];
  const waiting: number[][] = [];
  const wait = (i: number) => (waiting[rows[i]!.size] ??= []).push(i);
  for (const i of rows.keys()) wait(i);
  for (;;) {
    let next = -1;
    for (const list of waiting) {
      while (next < 0 && list !== undefined && list.length > 0) {
        const i = list.pop()!;
        if (open.has(i) && rows[i]!.size > 0 && waiting[rows[i]!.size] === list) next = i;
      }
      if (next >= 0) break;
    }
    if (next < 0) break;
    const pivot = rows[next]!.get(next);
    if (pivot === undefined || pivot.n <= 0n) return null;
    open.delete(next);
    order.push(next);
    pivots.push(pivot);
    const others = [...rows[next]!].filter(([j]) => j !== next);
    for (const [i, x] of others) {
      rows[i]!.delete(next);
      for (const [j, y] of others) {
        const old = rows[i]!.get(j) ?? { n: 0n, d: 1n };
        const d = x.d * y.d * pivot.n;
        const value = ratio(old.n * d - x.n * y.n * pivot.d * old.d, old.d * d);
        if (value.n === 0n) rows[i]!.delete(j);
        else rows[i]!.set(j, value);
      }
      wait(i);
    }
  }
  return { rows: order, pivots, zero: [...open].sort((a, b) => a - b) };
}

/** Product of pivots as a fraction. */
export function productOf(pivots: readonly Ratio[]): Ratio {
  return pivots.reduce((p, q) => ratio(p.n * q.n, p.d * q.d), { n: 1n, d: 1n });
}

/**
 * For k independent integer vectors as rows: the index of their span in all integer vectors of their space, and the
 * determinant of their entries in the given columns. Column operations of Euclid for the first, elimination for the second.
 * Returns null for the index if the vectors are dependent.
 */
export function indexInSpan(vectors: Matrix): bigint | null {
  const m = vectors.map((row) => [...row]);
  const used = new Set<number>();
  let index = 1n;
  for (const row of m) {
    for (;;) {
      const live = row.flatMap((x, j) => (x !== 0n && !used.has(j) ? [j] : []));
      if (live.length === 0) return null;
      const least = live.reduce((a, b) => (size(row[b]!) < size(row[a]!) ? b : a));
      if (live.length === 1) {
        used.add(least);
        index *= size(row[least]!);
        break;
      }
      for (const j of live) {
        if (j === least) continue;
        const q = row[j]! / row[least]!;
        for (const other of m) other[j]! -= q * other[least]!;
      }
    }
  }
  return index;
}

function size(x: bigint): bigint {
  return x < 0n ? -x : x;
}

/** Determinant by fraction-free elimination. */
export function determinantOf(matrix: Matrix): bigint {
  const m = matrix.map((row) => [...row]);
  let [sign, last] = [1n, 1n];
  for (let k = 0; k < m.length; k += 1) {
    const p = m.findIndex((row, i) => i >= k && row[k] !== 0n);
    if (p < 0) return 0n;
    if (p !== k) {
      [m[p], m[k]] = [m[k]!, m[p]!];
      sign = -sign;
    }
    for (let i = k + 1; i < m.length; i += 1) {
      for (let j = k + 1; j < m.length; j += 1) m[i]![j] = (m[i]![j]! * m[k]![k]! - m[i]![k]! * m[k]![j]!) / last;
    }
    last = m[k]![k]!;
  }
  return sign * last;
}

export function square(size: number): bigint[][] {
  return Array.from({ length: size }, () => new Array<bigint>(size).fill(0n));
}
