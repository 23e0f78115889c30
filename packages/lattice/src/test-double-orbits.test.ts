/** Double orbits against published counts, and against the sublattices of Z^n that the embeddings have as images. */
import {
  bigMatrix,
  dot,
  hermiteBasis,
  multiply,
  transpose,
  type BigMatrix,
  type ReadonlyBigMatrix,
} from '@palmette/exact';
import { describe, expect, it } from 'vitest';
import { buildLattice, rootLatticeSource, TestsOnList, type Lattice } from './index.ts';
import { seededIntegers, seededProduct } from './seeded-integers.ts';

function vectorsOfNorm(norm: number, n: number): bigint[][] {
  if (n === 0) return norm === 0 ? [[]] : [];
  const out: bigint[][] = [];
  for (let x = 0; x * x <= norm; x += 1)
    for (const rest of vectorsOfNorm(norm - x * x, n - 1)) {
      out.push([BigInt(x), ...rest]);
      if (x > 0) out.push([BigInt(-x), ...rest]);
    }
  return out;
}

/** Every A with A·Aᵀ = gram in Z^n, row by row. */
function allEmbeddings(gram: ReadonlyBigMatrix, n: number): BigMatrix[] {
  let partial: BigMatrix[] = [[]];
  for (const [i, row] of gram.entries()) {
    const vectors = vectorsOfNorm(Number(row[i]), n);
    partial = partial.flatMap((rows) =>
      vectors.filter((v) => rows.every((w, j) => dot(v, w) === row[j])).map((v) => [...rows, v]),
    );
  }
  return partial;
}

/** The nonzero columns, each with positive lead, descending: one text for each orbit. */
function canonical(rows: ReadonlyBigMatrix): BigMatrix {
  const columns = transpose(rows)
    .filter((c) => c.some((x) => x !== 0n))
    .map((c) => (c.find((x) => x !== 0n)! < 0n ? c.map((x) => -x) : c));
  columns.sort((a, b) => {
    const i = a.findIndex((x, k) => x !== b[k]);
    return i < 0 ? 0 : a[i]! > b[i]! ? -1 : 1;
  });
  return columns.length === 0 ? rows.map(() => []) : transpose(columns);
}

function orbits(gram: ReadonlyBigMatrix, n: number): BigMatrix[] {
  const seen = new Map<string, BigMatrix>();
  for (const rows of allEmbeddings(gram, n)) {
    const normal = canonical(rows);
    seen.set(normal.map((row) => row.join()).join(';'), normal);
  }
  return [...seen.values()];
}

function signedPermutations(n: number): BigMatrix[] {
  if (n === 0) return [[]];
  return signedPermutations(n - 1).flatMap((small) =>
    Array.from({ length: n }, (_, at) => at).flatMap((at) =>
      [1n, -1n].map((sign) => [
        ...small.map((row) => [...row.slice(0, at), 0n, ...row.slice(at)]),
        Array.from({ length: n }, (_, j) => (j === at ? sign : 0n)),
      ]),
    ),
  );
}

/** Two embeddings lie in one double orbit iff a signed permutation takes one image to the other. */
function imagesUpToSymmetry(list: readonly BigMatrix[], n: number): number {
  const symmetries = signedPermutations(n);
  const seen = new Set<string>();
  let count = 0;
  for (const rows of list) {
    const wide = rows.map((row) => [...row, ...new Array<bigint>(n - row.length).fill(0n)]);
    const write = (m: ReadonlyBigMatrix) => m.map((row) => row.join()).join(';');
    if (seen.has(write(hermiteBasis(wide)))) continue;
    count += 1;
    for (const p of symmetries) seen.add(write(hermiteBasis(multiply(wide, p))));
  }
  return count;
}

interface DoubleOrbits {
  readonly groupOrder: string;
  readonly count: string;
  readonly representatives: readonly number[];
  readonly generators: readonly string[][][];
}

function doubleOrbits(lattice: Lattice, list: readonly BigMatrix[], n: number, complete = true): DoubleOrbits {
  const tests = new TestsOnList({ lattice, dimension: n, tests: ['doubleOrbits'] });
  for (const rows of list) tests.take({ rows, zeros: n - rows[0]!.length });
  return tests.overall(complete)['doubleOrbits'] as unknown as DoubleOrbits;
}

const ofMatrix = (gram: ReadonlyBigMatrix) =>
  buildLattice({ kind: 'matrix', rows: gram.map((row) => row.map(String)) });

describe('double orbits', () => {
  // Conventions of the product, section 6: D_4 has 3 orbits and 1 double orbit; A_3 has two kinds of orbit from n = 4 on
  it('D_4 in Z^4: 3 orbits, 1 double orbit, group of order 1152', () => {
    const lattice = buildLattice(rootLatticeSource('D', 4));
    const list = orbits(lattice.gram, 4);
    expect(list).toHaveLength(3);
    expect(doubleOrbits(lattice, list, 4)).toMatchObject({ groupOrder: '1152', count: '1', representatives: [0] });
  });

  it('A_3: 1 in Z^3, 2 in Z^4 and not equivalent', () => {
    const lattice = buildLattice(rootLatticeSource('A', 3));
    expect(doubleOrbits(lattice, orbits(lattice.gram, 3), 3)).toMatchObject({ groupOrder: '48', count: '1' });
    const list = orbits(lattice.gram, 4);
    expect(list).toHaveLength(2);
    expect(doubleOrbits(lattice, list, 4)).toMatchObject({ count: '2', representatives: [0, 1] });
  });

  it('generators preserve the form as submitted, a semidefinite one too', () => {
    const degenerate = bigMatrix([
      [2, -1, -1],
      [-1, 2, -1],
      [-1, -1, 2],
    ]);
    const lattice = ofMatrix(degenerate);
    const answer = doubleOrbits(lattice, orbits(degenerate, 3), 3);
    expect(answer).toMatchObject({ groupOrder: '12', count: '1' });
    for (const generator of answer.generators) {
      const x = bigMatrix(generator);
      expect(multiply(multiply(x, degenerate), transpose(x))).toEqual(degenerate);
    }
  });

  it('are the images up to signed permutations, on random lattices of rank 1 to 3 in Z^n, n ≤ 4', () => {
    const random = seededIntegers(77);
    let joined = 0;
    for (let trial = 0; trial < 80; trial += 1) {
      const rank = random(1, 3);
      const n = random(rank, 4);
      const gram = seededProduct(random, rank, n);
      const list = orbits(gram, n);
      const { count, representatives } = doubleOrbits(ofMatrix(gram), list, n);
      expect({ gram, n, count }).toEqual({ gram, n, count: String(imagesUpToSymmetry(list, n)) });
      expect(representatives).toHaveLength(Number(count));
      if (Number(count) < list.length) joined += 1;
    }
    expect(joined).toBeGreaterThan(5);
  });

  it('says what it cannot decide', () => {
    const lattice = buildLattice(rootLatticeSource('A', 3));
    const list = orbits(lattice.gram, 4);
    expect(doubleOrbits(lattice, list, 4, false)).toEqual({ undecided: true, reason: 'the list is not complete' });
    expect(doubleOrbits(buildLattice(rootLatticeSource('E', 6)), [], 6)).toEqual({
      applies: false,
      reason: 'there is no embedding',
    });
    const wide = buildLattice(rootLatticeSource('A', 101));
    const rows = wide.gram.map((_, i) =>
      Array.from({ length: 102 }, (__, j) => (i === j ? 1n : i + 1 === j ? -1n : 0n)),
    );
    expect(doubleOrbits(wide, [rows], 102)).toEqual({ undecided: true, reason: 'the rank is 101, above 100' });
  });

  it('refuses a list that an automorphism leaves, though it is said to be complete', () => {
    const lattice = buildLattice(rootLatticeSource('D', 4));
    expect(() => doubleOrbits(lattice, orbits(lattice.gram, 4).slice(0, 2), 4)).toThrow(/out of the complete list/);
  });
});
