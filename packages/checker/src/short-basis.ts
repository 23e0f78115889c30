/**
 * A basis of short vectors of a positive definite lattice, by its Gram matrix alone (Lenstra–Lenstra–Lovász 1982, in integers: Cohen, A Course in Computational
 * Algebraic Number Theory, 2.6.3). Nothing has to be believed about it: only additions of multiples of one basis vector to another and swaps are made, so the lattice
 * stays what it is; a worse basis would only make the next listing longer.
 */
import type { Matrix } from './arithmetic.ts';

export function shortGram(gram: Matrix): bigint[][] {
  const size = gram.length;
  const g = gram.map((row) => [...row]);
  /** minor[k + 1]: determinant of the first k + 1 vectors; lambda[k][j] = minor[j + 1] · (coefficient of vector k at the j-th orthogonal one). */
  const minor: bigint[] = [1n];
  const lambda: bigint[][] = g.map(() => new Array<bigint>(size).fill(0n));

  const project = (k: number): void => {
    for (let j = 0; j <= k; j += 1) {
      let value = g[k]![j]!;
      for (let i = 0; i < j; i += 1) value = (minor[i + 1]! * value - lambda[k]![i]! * lambda[j]![i]!) / minor[i]!;
      if (j < k) lambda[k]![j] = value;
      else minor[k + 1] = value;
    }
  };
  const shorten = (k: number, j: number): void => {
    const d = minor[j + 1]!;
    const twice = 2n * lambda[k]![j]!;
    if (twice <= d && twice >= -d) return;
    const q = twice >= 0n ? (twice + d) / (2n * d) : -((d - twice) / (2n * d));
    for (let i = 0; i < size; i += 1) g[k]![i]! -= q * g[j]![i]!;
    for (let i = 0; i < size; i += 1) g[i]![k]! -= q * g[i]![j]!;
    for (let i = 0; i < j; i += 1) lambda[k]![i]! -= q * lambda[j]![i]!;
    lambda[k]![j]! -= q * d;
  };
  const exchange = (k: number, known: number): void => {
    [g[k], g[k - 1]] = [g[k - 1]!, g[k]!];
    for (const row of g) [row[k], row[k - 1]] = [row[k - 1]!, row[k]!];
    for (let j = 0; j < k - 1; j += 1) [lambda[k]![j], lambda[k - 1]![j]] = [lambda[k - 1]![j]!, lambda[k]![j]!];
    const l = lambda[k]![k - 1]!;
    const fresh = (minor[k - 1]! * minor[k + 1]! + l * l) / minor[k]!;
    for (let i = k + 1; i <= known; i += 1) {
      const old = lambda[i]![k]!;
      lambda[i]![k] = (minor[k + 1]! * lambda[i]![k - 1]! - l * old) / minor[k]!;
      lambda[i]![k - 1] = (fresh * old + l * lambda[i]![k]!) / minor[k + 1]!;
    }
    minor[k] = fresh;
  };

  if (size > 0) project(0);
  for (let k = 1, known = 0; k < size;) {
    if (k > known) {
      known = k;
      project(k);
    }
    shorten(k, k - 1);
    const l = lambda[k]![k - 1]!;
    if (4n * (minor[k + 1]! * minor[k - 1]! + l * l) < 3n * minor[k]! * minor[k]!) {
      exchange(k, known);
      k = Math.max(1, k - 1);
    } else {
      for (let j = k - 2; j >= 0; j -= 1) shorten(k, j);
      k += 1;
    }
  }
  return g;
}
