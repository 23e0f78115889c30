/**
 * LLL reduction of a positive definite Gram matrix, in integers throughout (Lenstra–Lenstra–Lovász, Math. Ann. 261
 * (1982); integral form: Cohen, section 2.6.3). Lovász constant 3/4.
 */
import { roundDivide, abs } from './integers.ts';
import { identityMatrix, type BigMatrix, type ReadonlyBigMatrix } from './matrix.ts';

export interface Reduction {
  /** U with Uᵀ·gram·U = reduced, and its inverse. */
  readonly change: BigMatrix;
  readonly inverse: BigMatrix;
  readonly gram: BigMatrix;
}

/** @throws RangeError if the form is not positive definite */
export function lllGram(gram: ReadonlyBigMatrix): Reduction {
  const n = gram.length;
  const g = gram.map((row) => [...row]);
  const basis = identityMatrix(n); // rows: new basis vectors in the old basis
  const dual = identityMatrix(n); // columns of the inverse, kept as rows
  const d: bigint[] = new Array<bigint>(n + 1).fill(1n); // d[i+1]: leading minor of size i+1
  const lambda: bigint[][] = Array.from({ length: n }, () => new Array<bigint>(n).fill(0n));

  const refresh = (k: number) => {
    for (let j = 0; j <= k; j += 1) {
      let u = g[k]![j]!;
      for (let i = 0; i < j; i += 1) u = (d[i + 1]! * u - lambda[k]![i]! * lambda[j]![i]!) / d[i]!;
      if (j < k) lambda[k]![j] = u;
      else {
        if (u <= 0n) throw new RangeError('expected a positive definite form');
        d[k + 1] = u;
      }
    }
  };
  const subtract = (k: number, l: number, q: bigint) => {
    for (let j = 0; j < n; j += 1) basis[k]![j]! -= q * basis[l]![j]!;
    for (let j = 0; j < n; j += 1) dual[l]![j]! += q * dual[k]![j]!;
    for (let j = 0; j < n; j += 1) g[k]![j]! -= q * g[l]![j]!;
    for (let j = 0; j < n; j += 1) g[j]![k]! -= q * g[j]![l]!;
  };
  const reduce = (k: number, l: number) => {
    if (2n * abs(lambda[k]![l]!) <= d[l + 1]!) return;
    const q = roundDivide(lambda[k]![l]!, d[l + 1]!);
    subtract(k, l, q);
    lambda[k]![l]! -= q * d[l + 1]!;
    for (let i = 0; i < l; i += 1) lambda[k]![i]! -= q * lambda[l]![i]!;
  };
  const swap = (k: number) => {
    [basis[k], basis[k - 1]] = [basis[k - 1]!, basis[k]!];
    [dual[k], dual[k - 1]] = [dual[k - 1]!, dual[k]!];
    [g[k], g[k - 1]] = [g[k - 1]!, g[k]!];
    for (const row of g) [row[k], row[k - 1]] = [row[k - 1]!, row[k]!];
    for (let j = 0; j < k - 1; j += 1) [lambda[k]![j], lambda[k - 1]![j]] = [lambda[k - 1]![j]!, lambda[k]![j]!];
    const l = lambda[k]![k - 1]!;
    const b = (d[k - 1]! * d[k + 1]! + l * l) / d[k]!;
    for (let i = k + 1; i < n; i += 1) {
      if (d[i + 1] === 1n && lambda[i]!.every((x) => x === 0n)) continue;
      const t = lambda[i]![k]!;
      lambda[i]![k] = (d[k + 1]! * lambda[i]![k - 1]! - l * t) / d[k]!;
      lambda[i]![k - 1] = (b * t + l * lambda[i]![k]!) / d[k + 1]!;
    }
    d[k] = b;
  };

  let seen = 0;
  if (n > 0) refresh(0);
  for (let k = 1; k < n;) {
    if (k > seen) {
      seen = k;
      refresh(k);
    }
    reduce(k, k - 1);
    const l = lambda[k]![k - 1]!;
    if (4n * (d[k + 1]! * d[k - 1]! + l * l) < 3n * d[k]! * d[k]!) {
      swap(k);
      k = Math.max(1, k - 1);
    } else {
      for (let j = k - 2; j >= 0; j -= 1) reduce(k, j);
      k += 1;
    }
  }
  const change = Array.from({ length: n }, (_, i) => basis.map((row) => row[i]!));
  return { change, inverse: dual.map((row) => [...row]), gram: g };
}
