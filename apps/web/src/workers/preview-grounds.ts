/**
 * Why a lattice cannot embed in Z^n, or in any, without a search: dimension, determinant, Hilbert symbols, and the
 * columns that do not span. The same steps in the same order, with the same bounds, as when the question is answered.
 */
import {
  arithmeticGround,
  columnGround,
  reducedBasis,
  type ArithmeticGround,
  type ColumnGround,
  type Lattice,
} from '@palmette/lattice';
import { shortBasis } from '@palmette/search';

/** Null: every n. */
export type Grounds = (n: number | null) => ArithmeticGround | ColumnGround | null;

/** The columns are listed up to this rank, for so many entries: milliseconds. */
const COLUMN_RANK = 60;
const COLUMN_STEPS = 20_000;

/** Each n is worked out once. */
export function groundsOf(lattice: Lattice): Grounds {
  const known = new Map<number | null, ArithmeticGround | ColumnGround | null>();
  let short: ReturnType<typeof shortBasis>['gram'] | undefined;
  const column = (n: number | null): ColumnGround | null => {
    if (lattice.rank > COLUMN_RANK) return null;
    const reduced = reducedBasis(lattice);
    short ??= shortBasis(reduced.gram, reduced.basis).gram;
    const ground = columnGround(short, n, COLUMN_STEPS);
    return ground === 'too many' ? null : ground;
  };
  return (n) => {
    if (!known.has(n)) known.set(n, (n === null ? null : arithmeticGround(lattice, n)) ?? column(n));
    return known.get(n)!;
  };
}
