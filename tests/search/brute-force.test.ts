/** The engine against a plain brute force on thousands of small lattices: the same sets of orbits and the same totals. */
import { describe, expect, it } from 'vitest';
import { determinant, multiply, transpose, type BigMatrix } from '@palmette/exact';
import { buildLattice, type Source } from '@palmette/lattice';
import { askLattice, matrix, typed } from './ask.ts';

/** A small generator with a fixed seed (Park–Miller). */
function sequence(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state * 48271) % 2147483647;
    return state % below;
  };
}

/** Row after row every integer vector of the right norm and inner products; then columns up to sign and order. */
function bruteForce(gram: BigMatrix, n: number): { set: Set<string>; total: bigint } {
  const rank = gram.length;
  const norm = (i: number) => Number(gram[i]![i]!);
  const vectors = (m: number): number[][] => {
    const out: number[][] = [];
    const fill = (v: number[], left: number) => {
      if (v.length === n) {
        if (left === 0) out.push(v);
        return;
      }
      for (let x = -Math.floor(Math.sqrt(left)); x * x <= left; x += 1) fill([...v, x], left - x * x);
    };
    fill([], m);
    return out;
  };
  const lists = gram.map((_, i) => vectors(norm(i)));
  const set = new Set<string>();
  let total = 0n;
  const place = (rows: number[][]) => {
    const i = rows.length;
    if (i === rank) {
      total += 1n;
      set.add(canonical(rows, n));
      return;
    }
    for (const v of lists[i]!)
      if (rows.every((row, j) => row.reduce((sum, x, k) => sum + x * v[k]!, 0) === Number(gram[i]![j]!)))
        place([...rows, v]);
  };
  place([]);
  return { set, total };
}

/** Nonzero columns with a positive lead, descending: the spelling of FORMAT.md, section 6. */
function canonical(rows: readonly (readonly number[])[], n: number): string {
  const columns = Array.from({ length: n }, (_, k) => rows.map((row) => row[k]!))
    .filter((column) => column.some((x) => x !== 0))
    .map((column) => (column.find((x) => x !== 0)! < 0 ? column.map((x) => 0 - x) : column))
    .sort((a, b) => b.find((x, i) => x !== a[i])! - a.find((x, i) => x !== b[i])! || 0);
  return rows.map((_, i) => columns.map((column) => column[i]).join(' ')).join(';');
}

function unimodular(next: (below: number) => number, size: number, steps: number): BigMatrix {
  const u: bigint[][] = Array.from({ length: size }, (_, i) =>
    Array.from({ length: size }, (_, j) => (i === j ? 1n : 0n)),
  );
  for (let k = 0; k < steps && size > 1; k += 1) {
    const i = next(size);
    const j = (i + 1 + next(size - 1)) % size;
    const factor = BigInt(next(3) - 1);
    u[i] = u[i]!.map((x, c) => x + factor * u[j]![c]!);
  }
  return u;
}

function compare(source: Source, n: number): void {
  const lattice = buildLattice(source);
  const expected = bruteForce(lattice.gram, n);
  const found = askLattice(lattice, { dimension: n }, { arithmetic: false });
  expect({ source, n, total: found.total, set: [...found.set].sort() }).toEqual({
    source,
    n,
    total: expected.total,
    set: [...expected.set].sort(),
  });
}

const rowsOf = (m: BigMatrix) => m.map((row) => row.map(Number));

describe('engine against brute force', () => {
  it('1,500 Gram matrices B·Bᵀ of rank 1 to 3, n up to 5', () => {
    const next = sequence(11);
    for (let done = 0; done < 1_500;) {
      const rank = 1 + next(3);
      const width = rank + next(2);
      const b = Array.from({ length: rank }, () => Array.from({ length: width }, () => BigInt(next(4) - 1)));
      const gram = multiply(b, transpose(b));
      if (determinant(gram) === 0n || gram.some((row, i) => row[i]! > 9n)) continue;
      compare(matrix(rowsOf(gram)), rank + next(rank === 3 ? 2 : 3));
      done += 1;
    }
  });

  it('600 forms that need not embed', () => {
    const next = sequence(12);
    for (let done = 0; done < 600;) {
      const rank = 2 + next(2);
      const rows = Array.from({ length: rank }, () => new Array<number>(rank).fill(0));
      for (let i = 0; i < rank; i += 1) {
        rows[i]![i] = 1 + next(6);
        for (let j = 0; j < i; j += 1) rows[i]![j] = rows[j]![i] = next(3) - 1;
      }
      try {
        const { nullity, sign } = buildLattice(matrix(rows));
        if (nullity > 0 || sign < 0) continue;
      } catch {
        continue; // an indefinite draw is no lattice of ours
      }
      compare(matrix(rows), rank + next(2));
      done += 1;
    }
  });

  it('500 scrambled bases: the same set after undoing the scramble', () => {
    const next = sequence(13);
    for (let done = 0; done < 500;) {
      const rank = 2 + next(2);
      const b = Array.from({ length: rank }, () => Array.from({ length: rank }, () => BigInt(next(4) - 1)));
      const gram = multiply(b, transpose(b));
      if (determinant(gram) === 0n || gram.some((row, i) => row[i]! > 7n)) continue;
      const u = unimodular(next, rank, 6);
      const scrambled = multiply(u, multiply(gram, transpose(u)));
      const n = rank + next(2);
      const plain = bruteForce(gram, n);
      const found = askLattice(buildLattice(matrix(rowsOf(scrambled))), { dimension: n }, { arithmetic: false });
      const expected = [...plain.set].map((text) =>
        canonical(
          rowsOf(
            multiply(
              u,
              text.split(';').map((row) => row.split(' ').map((x) => BigInt(x || 0))),
            ),
          ),
          text.split(';')[0]!.split(' ').length,
        ),
      );
      expect({ gram: rowsOf(gram), u: rowsOf(u), n, total: found.total, set: [...found.set].sort() }).toEqual({
        gram: rowsOf(gram),
        u: rowsOf(u),
        n,
        total: plain.total,
        set: expected.sort(),
      });
      done += 1;
    }
  });

  it('100 semidefinite forms', () => {
    const next = sequence(14);
    for (let done = 0; done < 100;) {
      const b = Array.from({ length: 3 }, () => Array.from({ length: 2 }, () => BigInt(next(4) - 1)));
      const gram = multiply(b, transpose(b));
      if (gram.some((row, i) => row[i]! > 6n) || gram.every((row) => row.every((x) => x === 0n))) continue;
      compare(matrix(rowsOf(gram)), 2 + next(2));
      done += 1;
    }
  });

  it.each(['A2', 'A3', 'D4', '7/3', '8/3', '9/2', '12/5', 'P(2, 3, -5)', '[1, 3]', '[2, 1]'])('%s', (text) => {
    const lattice = buildLattice(typed(text));
    for (let n = lattice.rank; n <= Math.min(lattice.rank + 1, 5); n += 1)
      if (lattice.rank <= 4) compare(typed(text), n);
  });
});
