/**
 * Peer 2, the encoding: entries are a sign and a magnitude of bits, bounded by the norm of their row (no minus zero); inner
 * products are sums of signed products, by adders; columns are sorted lexicographically and the first non-zero entry of each
 * is positive, so that each orbit of signed permutations has one solution.
 */
import { Cnf } from './cnf.ts';
import type { Problem } from './solver.ts';

interface Entry {
  readonly sign: number;
  /** Lowest bit first. */
  readonly magnitude: readonly number[];
}

export interface Encoding {
  readonly cnf: Cnf;
  /** Reads A from the set of true variables. */
  decode(isTrue: (variable: number) => boolean): number[][];
}

export function encode({ gram, dimension }: Problem): Encoding {
  const cnf = new Cnf();
  const a = gram.map((row, i) => Array.from({ length: dimension }, () => entry(cnf, Math.floor(Math.sqrt(row[i]!)))));
  gram.forEach((row, i) => row.forEach((value, j) => j <= i && innerProduct(cnf, a[i]!, a[j]!, value)));
  for (let k = 0; k < dimension; k += 1) {
    firstIsPositive(
      cnf,
      a.map((row) => row[k]!),
    );
    if (k > 0)
      sorted(
        cnf,
        a.flatMap((row) => key(cnf, row[k - 1]!)),
        a.flatMap((row) => key(cnf, row[k]!)),
      );
  }
  return {
    cnf,
    decode: (isTrue) =>
      a.map((row) =>
        row.map(({ sign, magnitude }) => {
          const size = magnitude.reduce((sum, bit, k) => sum + (isTrue(bit) ? 2 ** k : 0), 0);
          return isTrue(sign) ? -size : size;
        }),
      ),
  };
}

function entry(cnf: Cnf, bound: number): Entry {
  const bits = bound.toString(2).length;
  const [sign, magnitude] = [cnf.fresh(), Array.from({ length: bits }, () => cnf.fresh())];
  cnf.add(-sign, ...magnitude);
  for (let value = bound + 1; value < 2 ** bits; value += 1)
    cnf.add(...magnitude.map((bit, k) => (((value >> k) & 1) === 1 ? -bit : bit)));
  return { sign, magnitude };
}

/** Σ x_k·y_k = value; a negative bit of weight 2^k is 2^k − (its complement). */
function innerProduct(cnf: Cnf, x: readonly Entry[], y: readonly Entry[], value: number): void {
  const bits: number[][] = [];
  const put = (k: number, literal: number) => (bits[k] ??= []).push(literal);
  let constant = value;
  x.forEach((p, column) => {
    const q = y[column]!;
    const negative = p === q ? -cnf.true : cnf.xor(p.sign, q.sign);
    p.magnitude.forEach((b, i) =>
      q.magnitude.forEach((c, j) => {
        const both = b === c ? b : cnf.and(b, c);
        if (p === q) return put(i + j, both);
        put(i + j, cnf.and(both, -negative));
        put(i + j, -cnf.and(both, negative));
        constant += 2 ** (i + j);
      }),
    );
  });
  cnf.sumEquals(
    Array.from(bits, (column) => column ?? []),
    constant,
  );
}

function firstIsPositive(cnf: Cnf, column: readonly Entry[]): void {
  let zeroSoFar = cnf.true;
  for (const { sign, magnitude } of column) {
    cnf.add(-zeroSoFar, -sign);
    const zero = magnitude.reduce((all, bit) => cnf.and(all, -bit), zeroSoFar);
    zeroSoFar = zero;
  }
}

/** Bits, highest first, that order entries as integers. */
function key(cnf: Cnf, { sign, magnitude }: Entry): number[] {
  return [-sign, ...[...magnitude].reverse().map((bit) => cnf.xor(bit, sign))];
}

/** The bit string x is at least y. */
function sorted(cnf: Cnf, x: readonly number[], y: readonly number[]): void {
  let equal = cnf.true;
  x.forEach((bit, k) => {
    cnf.add(-equal, bit, -y[k]!);
    equal = cnf.and(equal, -cnf.xor(bit, y[k]!));
  });
}
