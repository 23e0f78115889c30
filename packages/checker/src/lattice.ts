/** The lattice block: rebuilt from the source, then compared member by member. FORMAT.md, section 4. */
import { determinantOf, eliminatePositive, indexInSpan, productOf, ratio, times, type Matrix } from './arithmetic.ts';
import {
  countOf,
  integerOf,
  listOf,
  objectOf,
  Rejection,
  stringIntegerOf,
  type Json,
  type JsonObject,
} from './reading.ts';
import { buildSource } from './sources.ts';

export interface CheckedLattice {
  /** The positive form, N × N. */
  readonly gram: Matrix;
  readonly rank: number;
  readonly nullity: number;
  readonly determinant: bigint;
}

/** Above this many basis vectors matrices stand in their sparse form. */
const SPARSE_ABOVE = 200;

export function checkLattice(source: Json, value: Json | undefined): CheckedLattice {
  const built = buildSource(source, '/question/source');
  const o = objectOf(value, '/lattice', ['gram', 'sign', 'orientation?', 'rank', 'nullity', 'determinant', 'radical']);
  const sign = o['sign'];
  if (sign !== 1 && sign !== -1) throw new Rejection('/lattice/sign', 'expected 1 or -1');
  if (o['orientation'] !== built.orientation)
    throw new Rejection('/lattice/orientation', `expected ${built.orientation ?? 'none'}`);
  const size = built.form.length;
  const gram = readStringMatrix(o['gram'], '/lattice/gram', size, size, size);
  gram.forEach((row, i) =>
    row.forEach((x, j) => {
      if (x !== BigInt(sign) * built.form[i]![j]!)
        throw new Rejection(`/lattice/gram/${i}/${j}`, 'differs from the form that the source builds');
    }),
  );
  const e = eliminatePositive(gram);
  if (e === null) throw new Rejection('/lattice/sign', 'the form is not semidefinite with this sign');
  if (sign === -1 && e.pivots.length === 0) throw new Rejection('/lattice/sign', 'the zero form has sign 1');
  if (countOf(o['rank'], '/lattice/rank') !== e.pivots.length)
    throw new Rejection('/lattice/rank', `expected ${e.pivots.length}`);
  if (countOf(o['nullity'], '/lattice/nullity') !== e.zero.length)
    throw new Rejection('/lattice/nullity', `expected ${e.zero.length}`);
  const radical = readRadical(o, gram, e.zero.length);
  const determinant = reducedDeterminant(productOf(e.pivots), radical, e.zero);
  if (stringIntegerOf(o['determinant'], '/lattice/determinant') !== determinant)
    throw new Rejection('/lattice/determinant', `expected ${determinant}`);
  return { gram, rank: e.pivots.length, nullity: e.zero.length, determinant };
}

function readRadical(o: JsonObject, gram: Matrix, nullity: number): Matrix {
  const radical = listOf(o['radical'], '/lattice/radical').map((row, i) =>
    listOf(row, `/lattice/radical/${i}`).map((x, j) => stringIntegerOf(x, `/lattice/radical/${i}/${j}`)),
  );
  if (radical.length !== nullity || radical.some((v) => v.length !== gram.length))
    throw new Rejection('/lattice/radical', `expected ${nullity} vectors of length ${gram.length}`);
  if (times(radical, gram).some((row) => row.some((x) => x !== 0n)))
    throw new Rejection('/lattice/radical', 'a vector that the form does not kill');
  if (indexInSpan(radical) !== 1n) throw new Rejection('/lattice/radical', 'not a basis of the radical');
  return radical;
}

/**
 * The pivots' product is the Gram determinant of the sublattice that their rows span modulo the radical; its index is the
 * determinant of the radical basis in the other rows, so the reduced determinant is the quotient by its square.
 */
function reducedDeterminant(product: { n: bigint; d: bigint }, radical: Matrix, others: readonly number[]): bigint {
  const index = determinantOf(radical.map((v) => others.map((i) => v[i]!)));
  const value = ratio(product.n, product.d * index * index);
  if (value.d !== 1n) throw new Rejection('/lattice/determinant', 'not an integer');
  return value.n;
}

/** A matrix of strings in the form that `size` basis vectors prescribe. */
export function readStringMatrix(
  value: Json | undefined,
  place: string,
  rows: number,
  columns: number,
  size: number,
): bigint[][] {
  return readMatrix(value, place, rows, columns, size, stringIntegerOf);
}

/** A matrix of numbers or strings in the form that `size` basis vectors prescribe. */
export function readIntegerMatrix(
  value: Json | undefined,
  place: string,
  rows: number,
  columns: number | null,
  size: number,
): bigint[][] {
  return readMatrix(value, place, rows, columns, size, integerOf);
}

function readMatrix(
  value: Json | undefined,
  place: string,
  rows: number,
  columns: number | null,
  size: number,
  read: (value: Json | undefined, place: string) => bigint,
): bigint[][] {
  if (size <= SPARSE_ABOVE) {
    const out = listOf(value, place).map((row, i) =>
      listOf(row, `${place}/${i}`).map((x, j) => read(x, `${place}/${i}/${j}`)),
    );
    const width = columns ?? out[0]?.length ?? 0;
    if (out.length !== rows || out.some((row) => row.length !== width))
      throw new Rejection(place, `expected ${rows} rows of ${width}`);
    return out;
  }
  const o = objectOf(value, place, ['size', 'entries']);
  const shape = listOf(o['size'], `${place}/size`);
  const width = columns ?? countOf(shape[1], `${place}/size/1`);
  if (shape.length !== 2 || shape[0] !== rows || shape[1] !== width)
    throw new Rejection(`${place}/size`, `expected [${rows}, ${width}]`);
  if (width > 1_000_000) throw new Rejection(`${place}/size`, 'too wide');
  const out = Array.from({ length: rows }, () => new Array<bigint>(width).fill(0n));
  let last = -1;
  listOf(o['entries'], `${place}/entries`).forEach((entry, k) => {
    const three = listOf(entry, `${place}/entries/${k}`);
    const i = countOf(three[0], `${place}/entries/${k}/0`);
    const j = countOf(three[1], `${place}/entries/${k}/1`);
    const x = read(three[2], `${place}/entries/${k}/2`);
    const at = i * width + j;
    if (three.length !== 3 || i >= rows || j >= width || at <= last || x === 0n)
      throw new Rejection(`${place}/entries/${k}`, 'not in row-major order, outside, or zero');
    last = at;
    out[i]![j] = x;
  });
  return out;
}
