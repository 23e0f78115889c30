/**
 * Elementary divisors d_1 | d_2 | … of an integer matrix. Unit entries are eliminated first, fewest neighbours first:
 * a plumbing has many, and what is left of it is tiny. The rest is diagonalised by Euclid's algorithm on rows and columns.
 */
import { abs, gcd } from './integers.ts';
import type { ReadonlyBigMatrix } from './matrix.ts';

type Sparse = Map<number, Map<number, bigint>>;

/** The nonzero elementary divisors, ascending by divisibility, ones included. */
export function elementaryDivisors(matrix: ReadonlyBigMatrix): bigint[] {
  const rows: Sparse = new Map();
  const columns: Map<number, Set<number>> = new Map();
  matrix.forEach((row, i) =>
    row.forEach((x, j) => {
      if (x !== 0n) put(rows, columns, i, j, x);
    }),
  );
  let ones = 0;
  for (let unit = findUnit(rows, columns); unit !== null; unit = findUnit(rows, columns)) {
    eliminateUnit(rows, columns, unit.i, unit.j);
    ones += 1;
  }
  const kept = [...rows.values()].filter((row) => row.size > 0);
  const names = [...new Set(kept.flatMap((row) => [...row.keys()]))];
  const rest = diagonalise(kept.map((row) => names.map((j) => row.get(j) ?? 0n)));
  return [...new Array<bigint>(ones).fill(1n), ...chainOf(rest)];
}

function put(rows: Sparse, columns: Map<number, Set<number>>, i: number, j: number, x: bigint): void {
  if (x === 0n) {
    rows.get(i)?.delete(j);
    columns.get(j)?.delete(i);
    return;
  }
  if (!rows.has(i)) rows.set(i, new Map());
  if (!columns.has(j)) columns.set(j, new Set());
  rows.get(i)!.set(j, x);
  columns.get(j)!.add(i);
}

/** A unit entry whose elimination fills in least; the first cheap one is good enough. */
function findUnit(rows: Sparse, columns: ReadonlyMap<number, ReadonlySet<number>>): { i: number; j: number } | null {
  let best: { i: number; j: number; cost: number } | null = null;
  for (const [i, row] of rows) {
    for (const [j, x] of row) {
      if (abs(x) !== 1n) continue;
      const cost = (row.size - 1) * (columns.get(j)!.size - 1);
      if (best === null || cost < best.cost) best = { i, j, cost };
      if (cost <= 1) return best;
    }
  }
  return best;
}

function eliminateUnit(rows: Sparse, columns: Map<number, Set<number>>, i: number, j: number): void {
  const row = [...rows.get(i)!];
  const unit = rows.get(i)!.get(j)!;
  for (const k of [...columns.get(j)!]) {
    if (k === i) continue;
    const factor = rows.get(k)!.get(j)! * unit;
    for (const [column, x] of row) put(rows, columns, k, column, (rows.get(k)!.get(column) ?? 0n) - factor * x);
  }
  for (const [column] of row) columns.get(column)!.delete(i);
  rows.delete(i);
}

/** Diagonal entries of a dense matrix after row and column operations; zeros are left out. */
function diagonalise(m: bigint[][]): bigint[] {
  const out: bigint[] = [];
  const rows = m.filter((row) => row.some((x) => x !== 0n));
  while (rows.length > 0 && rows[0]!.length > 0) {
    let pivot = smallest(rows);
    if (pivot === null) break;
    for (;;) {
      const { i, j } = pivot;
      const p = rows[i]![j]!;
      let clean = true;
      rows.forEach((row, k) => {
        if (k === i || row[j] === 0n) return;
        const q = row[j]! / p;
        row.forEach((x, c) => (row[c] = x - q * rows[i]![c]!));
        if (row[j] !== 0n) clean = false;
      });
      if (clean) {
        for (let c = 0; c < rows[i]!.length; c += 1) {
          if (c === j || rows[i]![c] === 0n) continue;
          const q = rows[i]![c]! / p;
          for (const row of rows) row[c]! -= q * row[j]!;
          if (rows[i]![c] !== 0n) clean = false;
        }
      }
      if (clean) break;
      pivot = smallestIn(rows, i, j);
    }
    out.push(abs(rows[pivot.i]![pivot.j]!));
    rows.splice(pivot.i, 1);
    for (const row of rows) row.splice(pivot.j, 1);
  }
  return out;
}

function smallest(rows: readonly (readonly bigint[])[]): { i: number; j: number } | null {
  let best: { i: number; j: number; size: bigint } | null = null;
  rows.forEach((row, i) =>
    row.forEach((x, j) => {
      if (x !== 0n && (best === null || abs(x) < best.size)) best = { i, j, size: abs(x) };
    }),
  );
  return best;
}

/** The smallest entry of one row and one column: Euclid's next divisor. */
function smallestIn(rows: readonly (readonly bigint[])[], i: number, j: number): { i: number; j: number } {
  let best = { i, j, size: abs(rows[i]![j]!) };
  rows.forEach((row, k) => {
    if (row[j] !== 0n && abs(row[j]!) < best.size) best = { i: k, j, size: abs(row[j]!) };
  });
  rows[i]!.forEach((x, c) => {
    if (x !== 0n && abs(x) < best.size) best = { i, j: c, size: abs(x) };
  });
  return best;
}

/** Turns any diagonal into the one in which each entry divides the next. */
function chainOf(diagonal: readonly bigint[]): bigint[] {
  const d = [...diagonal];
  for (let i = 0; i < d.length; i += 1) {
    for (let j = i + 1; j < d.length; j += 1) {
      const g = gcd(d[i]!, d[j]!);
      d[j] = (d[i]! / g) * d[j]!;
      d[i] = g;
    }
  }
  return d;
}
