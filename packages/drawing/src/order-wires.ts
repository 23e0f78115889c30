/**
 * In which order the wires hang. Each column is signed so that its first entry, in drawing order, is positive; then
 * they are sorted by their first vertex, their second, and so on, so that the picture falls as a staircase. Equal
 * neighbours can hang as one line. The certificate's own order is kept on wish.
 */
import { isZero, type DrawnInteger } from './numerals.ts';

export interface WireEntry {
  /** Place of the vertex on the bar. */
  readonly place: number;
  readonly value: bigint;
}

/** One line of the trellis: a wire, or several equal ones. */
export interface Wire {
  /** By place; never empty. */
  readonly entries: readonly WireEntry[];
  /** Columns of the matrix that hang here. */
  readonly columns: readonly number[];
  /** The labels run on: this line is e_first … e_last. */
  readonly first: number;
  readonly last: number;
}

export interface Wires {
  readonly wires: readonly Wire[];
  /** Zero columns, those of the matrix and those that were left out of it. */
  readonly bare: number;
}

export interface WireOptions {
  /** `certificate` leaves order and signs as the matrix has them. */
  readonly arrange?: 'staircase' | 'certificate';
  /** So many equal wires hang as one line. */
  readonly bundleFrom?: number;
  readonly zeroColumns?: number;
}

/** From so many equal wires on, one double line stands for all. */
export const BUNDLE_FROM = 4;

/**
 * @param matrix one row for each vertex
 * @param order `order[place]` is the row that stands at that place of the bar
 */
export function hangWires(
  matrix: readonly (readonly DrawnInteger[])[],
  order: readonly number[],
  options: WireOptions = {},
): Wires {
  const { arrange = 'staircase', bundleFrom = BUNDLE_FROM, zeroColumns = 0 } = options;
  const columns: { column: number; entries: WireEntry[] }[] = [];
  const byColumn = new Map<number, WireEntry[]>();
  order.forEach((row, place) =>
    matrix[row]!.forEach((value, column) => {
      if (isZero(value)) return;
      const entries = byColumn.get(column);
      if (entries === undefined) byColumn.set(column, [{ place, value: BigInt(value) }]);
      else entries.push({ place, value: BigInt(value) });
    }),
  );
  for (const [column, entries] of byColumn)
    columns.push({ column, entries: arrange === 'staircase' && entries[0]!.value < 0n ? negate(entries) : entries });
  columns.sort((a, b) => (arrange === 'staircase' ? compareEntries(a.entries, b.entries) : 0) || a.column - b.column);
  const width = matrix[0]?.length ?? 0;
  return { wires: bundle(columns, bundleFrom), bare: zeroColumns + width - columns.length };
}

function negate(entries: readonly WireEntry[]): WireEntry[] {
  return entries.map(({ place, value }) => ({ place, value: -value }));
}

/** By places first, a wire that ends sooner after one that goes on; then by values, −1 before 1. */
function compareEntries(a: readonly WireEntry[], b: readonly WireEntry[]): number {
  const shared = Math.min(a.length, b.length);
  for (let i = 0; i < shared; i += 1) {
    if (a[i]!.place !== b[i]!.place) return a[i]!.place - b[i]!.place;
  }
  if (a.length !== b.length) return b.length - a.length;
  for (let i = 0; i < shared; i += 1) {
    if (a[i]!.value !== b[i]!.value) return a[i]!.value < b[i]!.value ? -1 : 1;
  }
  return 0;
}

function bundle(columns: readonly { column: number; entries: WireEntry[] }[], bundleFrom: number): Wire[] {
  const wires: Wire[] = [];
  let label = 1;
  for (let at = 0; at < columns.length;) {
    const { entries } = columns[at]!;
    let end = at + 1;
    while (end < columns.length && compareEntries(columns[end]!.entries, entries) === 0) end += 1;
    const step = end - at >= bundleFrom ? end - at : 1;
    for (; at < end; at += step, label += step) {
      const own = columns.slice(at, at + step).map(({ column }) => column);
      wires.push({ entries, columns: own, first: label, last: label + step - 1 });
    }
  }
  return wires;
}
