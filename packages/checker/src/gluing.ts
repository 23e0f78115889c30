/** The unimodular lattices of FORMAT.md, G0 and G1, made again from W. */
import { determinantOf, type Matrix } from './arithmetic.ts';
import { NotChecked } from './reading.ts';
import { inverseOf, rootsOfUnit } from './unit-roots.ts';

/** Overlattices that are kept, and lines of one kernel that are tried, at most. */
const MOST_LATTICES = 20_000;
const MOST_LINES = 200_000n;

interface Lattice {
  /** Gram matrix of a basis. */
  readonly gram: Matrix;
  readonly determinant: bigint;
  /** The basis of W in it: what tells overlattices apart, in Hermite form. */
  readonly key: string;
  readonly inside: Matrix;
}

/** Gram matrices of the lattices Γ. @param primes those of det W @param excess n − r, 0 or 1 */
export function gluedLattices(gram: Matrix, primes: readonly bigint[], excess: number): Matrix[] {
  const all = overlattices(gram, primes);
  if (excess === 0) return all.filter((l) => l.determinant === 1n).map((l) => l.gram);
  return all.flatMap((l) => glue(l, primes));
}

function overlattices(gram: Matrix, primes: readonly bigint[]): Lattice[] {
  const identity = gram.map((_, i) => gram.map((__, j) => (i === j ? 1n : 0n)));
  const out: Lattice[] = [{ gram, determinant: determinantOf(gram), key: hermiteKey(identity), inside: identity }];
  const known = new Set(out.map((l) => l.key));
  for (const lattice of out) {
    for (const p of primes) {
      if (lattice.determinant % (p * p) !== 0n) continue;
      for (const z of lines(kernel(lattice.gram, p), p)) {
        const image = lattice.gram.map((row) => row.reduce((sum, x, j) => sum + x * z[j]!, 0n));
        if (image.reduce((sum, x, i) => sum + x * z[i]!, 0n) % (p * p) !== 0n) continue;
        const next = step(lattice, z, p);
        if (known.has(next.key)) continue;
        if (out.length >= MOST_LATTICES) throw new NotChecked(`more than ${MOST_LATTICES} overlattices`);
        known.add(next.key);
        out.push(next);
      }
    }
  }
  return out;
}

/** L + Z·z/p: where z_k = 1, the basis vector b_k is replaced by z/p. */
function step({ gram, determinant, inside }: Lattice, z: readonly bigint[], p: bigint): Lattice {
  const k = z.indexOf(1n);
  const image = gram.map((row) => row.reduce((sum, x, j) => sum + x * z[j]!, 0n));
  const norm = image.reduce((sum, x, i) => sum + x * z[i]!, 0n) / (p * p);
  const next = gram.map((row, i) =>
    row.map((x, j) => (i === k && j === k ? norm : i === k ? image[j]! / p : j === k ? image[i]! / p : x)),
  );
  // b_k = p·(z/p) − Σ z_j b_j
  const moved = inside.map((row) => row.map((x, j) => (j === k ? p * row[k]! : x - z[j]! * row[k]!)));
  return { gram: next, determinant: determinant / (p * p), key: hermiteKey(moved), inside: moved };
}

/** Columns by columns: Hermite form under integer column operations, written out. */
function hermiteKey(rows: Matrix): string {
  const m = rows.map((row) => [...row]);
  const size = m.length;
  for (let i = 0, left = 0; i < size; i += 1) {
    const row = m[i]!;
    for (;;) {
      let best = -1;
      for (let j = left; j < size; j += 1) if (row[j] !== 0n && (best < 0 || abs(row[j]!) < abs(row[best]!))) best = j;
      if (best < 0) break;
      for (const r of m) [r[left], r[best]] = [r[best]!, r[left]!];
      if (row[left]! < 0n) for (const r of m) r[left] = -r[left]!;
      let clean = true;
      for (let j = 0; j < size; j += 1) {
        if (j === left) continue;
        const q = floorDivide(row[j]!, row[left]!);
        if (j < left || row[j] !== 0n) for (const r of m) r[j]! -= q * r[left]!;
        if (j > left && row[j] !== 0n) clean = false;
      }
      if (clean) {
        left += 1;
        break;
      }
    }
  }
  return m.map((row) => row.join(' ')).join(';');
}

const abs = (x: bigint): bigint => (x < 0n ? -x : x);
const floorDivide = (a: bigint, d: bigint): bigint => (a >= 0n ? a / d : -((d - 1n - a) / d));
const residue = (a: bigint, m: bigint): bigint => ((a % m) + m) % m;

/** Vectors that span { z : G·z ≡ 0 modulo p }, each with a 1 at a place where the others have 0. */
function kernel(gram: Matrix, p: bigint): bigint[][] {
  const size = gram.length;
  const m = gram.map((row) => row.map((x) => residue(x, p)));
  const pivotOf = new Map<number, number>();
  for (let j = 0, top = 0; j < size; j += 1) {
    const at = m.findIndex((row, i) => i >= top && row[j] !== 0n);
    if (at < 0) continue;
    [m[at], m[top]] = [m[top]!, m[at]!];
    const scale = inverseOf(m[top]![j]!, p);
    m[top] = m[top]!.map((x) => (x * scale) % p);
    m.forEach((row, i) => {
      const factor = row[j]!;
      if (i !== top && factor !== 0n) m[i] = row.map((x, c) => residue(x - factor * m[top]![c]!, p));
    });
    pivotOf.set(j, top);
    top += 1;
  }
  return gram.flatMap((_, free) =>
    pivotOf.has(free)
      ? []
      : [gram.map((__, j) => (j === free ? 1n : pivotOf.has(j) ? residue(-m[pivotOf.get(j)!]![free]!, p) : 0n))],
  );
}

/** A vector of each line of their span modulo p; its first coefficient is 1, so it has an entry 1. */
function lines(vectors: readonly (readonly bigint[])[], p: bigint): bigint[][] {
  if (vectors.length > 1 && p ** BigInt(vectors.length - 1) > MOST_LINES)
    throw new NotChecked(`more than ${MOST_LINES} lines modulo ${p}`);
  const combine = (base: readonly (readonly bigint[])[], more: readonly (readonly bigint[])[]): bigint[][] =>
    more.reduce<bigint[][]>(
      (list, v) =>
        list.flatMap((z) => Array.from({ length: Number(p) }, (_, c) => z.map((x, j) => (x + BigInt(c) * v[j]!) % p))),
      base.map((z) => [...z]),
    );
  return vectors.flatMap((v, i) => combine([v], vectors.slice(i + 1)));
}

/** G1: the generator's norm is a/m; the dual basis vector e_i is ℓ_i·g, with (e_i, g) = ℓ_i·a/m. */
function glue({ gram, determinant: m }: Lattice, primes: readonly bigint[]): Matrix[] {
  const adjugate = adjugateOf(gram, m);
  const g = generator(
    adjugate,
    primes.filter((p) => m % p === 0n),
  );
  if (g === null) return [];
  const products = adjugate.map((row) => row.reduce((sum, x, j) => sum + x * g[j]!, 0n));
  const a = products.reduce((sum, x, i) => sum + x * g[i]!, 0n);
  const perUnit = m === 1n ? 0n : inverseOf(a, m);
  return rootsOfUnit(residue(-a, m), m, primes).map((t) => {
    const x = products.map((y) => residue(y * perUnit * t, m));
    return [...adjugate.map((row, i) => [...row.map((y, j) => (y + x[i]! * x[j]!) / m), x[i]!]), [...x, m]];
  });
}

/** Null where the group is not cyclic: every column of the adjugate vanishes modulo a prime. */
function generator(adjugate: Matrix, primes: readonly bigint[]): bigint[] | null {
  const g = adjugate.map(() => 0n);
  let before = 1n;
  for (const p of primes) {
    const vanishes = adjugate.every((row) => row.reduce((sum, x, j) => sum + x * g[j]!, 0n) % p === 0n);
    if (vanishes) {
      const j = adjugate.findIndex((row) => row.some((x) => x % p !== 0n));
      if (j < 0) return null;
      g[j]! += before;
    }
    before *= p;
  }
  return g;
}

/** det G · G⁻¹, by growing G row after row. */
function adjugateOf(gram: Matrix, determinant: bigint): bigint[][] {
  let inverse: bigint[][] = [];
  let d = 1n;
  gram.forEach((row, k) => {
    const w = inverse.map((line) => line.reduce((sum, x, j) => sum + x * row[j]!, 0n));
    const next = w.reduce((sum, x, i) => sum - x * row[i]!, d * row[k]!);
    inverse = [
      ...inverse.map((line, i) => [...line.map((x, j) => (next * x + w[i]! * w[j]!) / d), -w[i]!]),
      [...w.map((x) => -x), d],
    ];
    d = next;
  });
  if (d !== determinant) throw new Error('the determinant of an overlattice is not what its index says');
  return inverse;
}
