/** Admissible columns against their definition, and the ground that they do not span. */
import { inverse, lllGram, multiply, transpose, type BigMatrix, type ReadonlyBigMatrix } from '@palmette/exact';
import { describe, expect, it } from 'vitest';
import { buildLattice, columnGround, listAdmissibleColumns, rootLatticeSource } from './index.ts';
import { seededIntegers, seededProduct } from './seeded-integers.ts';

const MANY = 1_000_000;

function rootGram(type: 'A' | 'D' | 'E', rank: number): BigMatrix {
  return buildLattice(rootLatticeSource(type, rank)).gram;
}

function listed(gram: ReadonlyBigMatrix, unitOnly: boolean): string[] {
  const out: string[] = [];
  expect(listAdmissibleColumns(gram, { unitOnly, maxSteps: MANY }, (c) => out.push(c.join()) < 0)).toBe('listed');
  return out.sort();
}

/** Every c with |c_i|² ≤ W_ii, tested on cᵀ(adj W)c ≤ det W. */
function byDefinition(gram: ReadonlyBigMatrix, unitOnly: boolean): string[] {
  const { numerator, denominator } = inverse(gram);
  let all: bigint[][] = [[]];
  for (const [i, row] of gram.entries()) {
    let reach = 0n;
    while ((reach + 1n) ** 2n <= row[i]!) reach += 1n;
    all = all.flatMap((c) => Array.from({ length: Number(2n * reach) + 1 }, (_, k) => [...c, BigInt(k) - reach]));
  }
  return all
    .filter((c) => (c.find((x) => x !== 0n) ?? 0n) > 0n)
    .filter((c) => {
      const value = multiply(multiply([c], numerator), transpose([c]))[0]![0]!;
      return unitOnly ? value === denominator : value <= denominator;
    })
    .map((c) => c.join())
    .sort();
}

describe('admissible columns', () => {
  it('are those of the definition, on random forms of rank 1 to 4', () => {
    const random = seededIntegers(7);
    for (let trial = 0; trial < 200; trial += 1) {
      const rank = random(1, 4);
      const gram = seededProduct(random, rank, rank + random(0, 2));
      for (const unitOnly of [false, true])
        expect({ gram, unitOnly, columns: listed(gram, unitOnly) }).toEqual({
          gram,
          unitOnly,
          columns: byDefinition(gram, unitOnly),
        });
    }
  });

  it('A_3: the 4 of its embedding in Z^4 and the 3 of that in Z^3', () => {
    expect(listed(rootGram('A', 3), false)).toHaveLength(7);
    expect(listed(rootGram('A', 3), true)).toHaveLength(3);
  });

  it('gives up at the bound on steps, and refuses a form that is not definite', () => {
    const gram = rootGram('A', 10);
    expect(listAdmissibleColumns(gram, { unitOnly: false, maxSteps: 20 }, () => false)).toBe('too many');
    const degenerate = [
      [1n, 1n],
      [1n, 1n],
    ];
    expect(() => listAdmissibleColumns(degenerate, { unitOnly: false, maxSteps: 20 }, () => false)).toThrow(RangeError);
  });
});

describe('the ground column', () => {
  // the least norms of the dual lattices are 4/3, 3/2 and 2: Conway–Sloane, ch. 4, section 8
  it.each([6, 7, 8])('E_%i has no admissible column', (rank) => {
    expect(columnGround(rootGram('E', rank), null, MANY)).toEqual({ ground: 'column', vectors: '0', spanned: 0 });
  });

  it('E_6 beside two ⟨1⟩ in a scrambled basis: the columns span 2 of 8 dimensions', () => {
    const random = seededIntegers(11);
    const form = rootGram('E', 6).map((row) => [...row, 0n, 0n]);
    form.push([0n, 0n, 0n, 0n, 0n, 0n, 1n, 0n], [0n, 0n, 0n, 0n, 0n, 0n, 0n, 1n]);
    for (let k = 0; k < 60; k += 1) {
      const [i, j] = [random(0, 7), random(0, 7)];
      if (i === j) continue;
      form[i] = form[i]!.map((x, c) => x + form[j]![c]!);
      for (const row of form) row[i]! += row[j]!;
    }
    const reduced = lllGram(form).gram;
    for (const n of [null, 8, 12])
      expect(columnGround(reduced, n, MANY)).toEqual({ ground: 'column', vectors: '2', spanned: 2 });
  });

  it('counts only norm 1 at n = rank: A_2 has 3 admissible columns, none of norm 1', () => {
    expect(columnGround(rootGram('A', 2), 2, MANY)).toEqual({ ground: 'column', vectors: '0', spanned: 0 });
    expect(columnGround(rootGram('A', 2), 3, MANY)).toBeNull();
    expect(columnGround(rootGram('A', 2), null, MANY)).toBeNull();
  });

  it('says nothing at rank 0, below the rank, or beyond its bound', () => {
    expect(columnGround([], 0, MANY)).toBeNull();
    expect(columnGround(rootGram('A', 2), 1, MANY)).toBeNull();
    expect(columnGround(rootGram('E', 8), null, 3)).toBe('too many');
  });

  it('never excludes B·Bᵀ: 1,000 random ones in their own dimension and in every', () => {
    const random = seededIntegers(23);
    for (let trial = 0; trial < 1_000; trial += 1) {
      const rank = random(1, 7);
      const n = rank + random(0, 2);
      const gram = seededProduct(random, rank, n);
      const reduced = lllGram(gram).gram;
      expect({ gram, n, own: columnGround(reduced, n, MANY), any: columnGround(reduced, null, MANY) }).toEqual({
        gram,
        n,
        own: null,
        any: null,
      });
    }
  });
});
