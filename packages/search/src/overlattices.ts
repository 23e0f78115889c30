/**
 * All integral overlattices of a lattice, step by step through prime indices. L' ⊃ L of prime index p is L + Z·z/p for a line z in the kernel of
 * the Gram matrix G modulo p (z/p lies in the dual), and it is integral iff zᵀGz ≡ 0 modulo p². Every integral overlattice is reached, because a chain
 * of subgroups of prime index leads to it and everything between is integral. (Nikulin 1979, §1; Conway–Sloane, Sphere Packings, ch. 15.)
 */
import {
  hermiteBasis,
  lllGram,
  modulo,
  multiply,
  transpose,
  type BigMatrix,
  type ReadonlyBigMatrix,
} from '@palmette/exact';

export interface Overlattice {
  /** Gram matrix of an LLL-reduced basis. */
  readonly gram: BigMatrix;
  readonly determinant: bigint;
  /** Row i: the i-th vector of W in that basis. */
  readonly coordinates: BigMatrix;
}

/** Lines of one kernel that are tried at most. */
const MOST_LINES = 20_000n;

/**
 * @param primes the primes of the determinant
 * @returns the lattice itself first; null where there are more than `most`, or too many lines to try
 */
export function integralOverlattices(
  gram: ReadonlyBigMatrix,
  determinant: bigint,
  primes: readonly bigint[],
  most: number,
): Overlattice[] | null {
  const rank = gram.length;
  const coordinates = gram.map((_, i) => gram.map((__, j) => (i === j ? 1n : 0n)));
  const found: Overlattice[] = [{ gram: gram.map((row) => [...row]), determinant, coordinates }];
  const seen = new Set([keyOf(found[0]!)]);
  for (let k = 0; k < found.length; k += 1) {
    const lattice = found[k]!;
    for (const p of primes) {
      if (lattice.determinant % (p * p) !== 0n) continue;
      const kernel = kernelModulo(lattice.gram, p);
      if (p ** BigInt(kernel.length - 1) > MOST_LINES) return null;
      for (const z of linesOf(kernel, p, rank)) {
        if (modulo(normOf(lattice.gram, z), p * p) !== 0n) continue;
        const next = adjoin(lattice, z, p);
        const key = keyOf(next);
        if (seen.has(key)) continue;
        if (found.length >= most) return null;
        seen.add(key);
        found.push(next);
      }
    }
  }
  return found;
}

/** L is determined by the columns of the coordinates up to integer column operations. */
function keyOf({ coordinates }: Overlattice): string {
  return hermiteBasis(transpose(coordinates))
    .map((row) => row.join(' '))
    .join(';');
}

function normOf(gram: ReadonlyBigMatrix, z: readonly bigint[]): bigint {
  return gram.reduce(
    (sum, row, i) => (z[i] === 0n ? sum : sum + z[i]! * row.reduce((inner, x, j) => inner + x * z[j]!, 0n)),
    0n,
  );
}

/** L + Z·z/p; an entry of z is 1 modulo p, and that basis vector is replaced. */
function adjoin({ gram, determinant, coordinates }: Overlattice, z: readonly bigint[], p: bigint): Overlattice {
  const at = z.findIndex((x) => x === 1n);
  const size = gram.length;
  // G of the basis with b_at replaced by Σ z_j b_j, then divided by p
  const change = gram.map((_, i) => gram.map((__, j) => (i === at ? z[j]! : i === j ? 1n : 0n)));
  const product = multiply(multiply(change, gram), transpose(change));
  const next = product.map((row, i) => row.map((x, j) => x / ((i === at ? p : 1n) * (j === at ? p : 1n))));
  const moved = coordinates.map((row) => row.map((x, j) => (j === at ? p * row[at]! : x - z[j]! * row[at]!)));
  const reduction = lllGram(next);
  return {
    gram: reduction.gram,
    determinant: determinant / (p * p),
    coordinates: size === 0 ? [] : multiply(moved, transpose(reduction.inverse)),
  };
}

/** A basis of the kernel modulo p, in reduced echelon form: each vector has a 1 where the others have 0. */
function kernelModulo(gram: ReadonlyBigMatrix, p: bigint): bigint[][] {
  const size = gram.length;
  const m = gram.map((row) => row.map((x) => modulo(x, p)));
  const pivots: number[] = [];
  let top = 0;
  for (let j = 0; j < size && top < size; j += 1) {
    const at = m.findIndex((row, i) => i >= top && row[j] !== 0n);
    if (at < 0) continue;
    [m[top], m[at]] = [m[at]!, m[top]!];
    const inverse = inverseOf(m[top]![j]!, p);
    m[top] = m[top]!.map((x) => (x * inverse) % p);
    for (let i = 0; i < size; i += 1) {
      const factor = m[i]![j]!;
      if (i === top || factor === 0n) continue;
      m[i] = m[i]!.map((x, c) => modulo(x - factor * m[top]![c]!, p));
    }
    pivots.push(j);
    top += 1;
  }
  const free = gram.flatMap((_, j) => (pivots.includes(j) ? [] : [j]));
  return free.map((f) => {
    const vector = new Array<bigint>(size).fill(0n);
    vector[f] = 1n;
    pivots.forEach((j, i) => (vector[j] = modulo(-m[i]![f]!, p)));
    return vector;
  });
}

function inverseOf(a: bigint, p: bigint): bigint {
  let [r0, r1, s0, s1] = [p, a, 0n, 1n];
  while (r1 !== 0n) {
    const q = r0 / r1;
    [r0, r1, s0, s1] = [r1, r0 - q * r1, s1, s0 - q * s1];
  }
  return modulo(s0, p);
}

/** One vector of each line of the span, with a 1 at its first free place. */
function* linesOf(kernel: readonly (readonly bigint[])[], p: bigint, size: number): Generator<bigint[]> {
  const count = kernel.length;
  for (let first = 0; first < count; first += 1) {
    const behind = BigInt(count - first - 1);
    for (let code = 0n; code < p ** behind; code += 1n) {
      const z = [...kernel[first]!];
      for (let k = first + 1, rest = code; k < count; k += 1, rest /= p) {
        const factor = rest % p;
        if (factor !== 0n) for (let j = 0; j < size; j += 1) z[j] = (z[j]! + factor * kernel[k]![j]!) % p;
      }
      yield z;
    }
  }
}
