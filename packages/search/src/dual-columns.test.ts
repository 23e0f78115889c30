/** Admissible columns against plain enumeration, and the two arithmetics of the frames against each other. */
import { describe, expect, it } from 'vitest';
import { determinant, inverse, multiply, transpose, type BigMatrix } from '@palmette/exact';
import { admissibleColumns } from './admissible-columns.ts';
import { dualForm, exactGap, type DualForm } from './dual-form.ts';
import { frameRoot, FramesLadder } from './frames-ladder.ts';
import { LISTED } from './listing.ts';

const BOUNDS = { steps: 1e7, vectors: 1e6 };

/** Park–Miller with a fixed seed. */
function sequence(seed: number): (below: number) => number {
  let state = seed;
  return (below) => (state = (state * 48271) % 2147483647) % below;
}

function randomForm(next: (below: number) => number, rank: number, width: number): BigMatrix {
  for (;;) {
    const b = Array.from({ length: rank }, () => Array.from({ length: width }, () => BigInt(next(5) - 2)));
    const gram = multiply(b, transpose(b));
    if (determinant(gram) !== 0n) return gram;
  }
}

/** Every c up to sign with |c_i|² ≤ W_ii and cᵀ(adj W)c ≤ d, by trying all. */
function plainColumns(gram: BigMatrix): string[] {
  const { numerator, denominator } = inverse(gram);
  const out: string[] = [];
  const fill = (c: bigint[]): void => {
    if (c.length < gram.length) {
      const norm = gram[c.length]![c.length]!;
      let reach = 0n;
      while ((reach + 1n) ** 2n <= norm) reach += 1n;
      for (let x = -reach; x <= reach; x += 1n) fill([...c, x]);
      return;
    }
    const lead = c.find((x) => x !== 0n);
    if (lead === undefined || lead < 0n) return;
    const [row] = multiply(multiply([c], numerator), transpose([c]));
    if (row![0]! <= denominator) out.push(c.join(' '));
  };
  fill([]);
  return out.sort();
}

const texts = (form: DualForm, entries: Int32Array): string[] =>
  Array.from({ length: entries.length / form.rank }, (_, k) => {
    const c = [...entries.subarray(k * form.rank, (k + 1) * form.rank)];
    return (c.find((x) => x !== 0)! < 0 ? c.map((x) => 0 - x) : c).join(' ');
  }).sort();

describe('admissible columns', () => {
  it('are those of plain enumeration on 300 random forms, in doubles and by residues', () => {
    const next = sequence(31);
    for (let k = 0; k < 300; k += 1) {
      const rank = 1 + next(4);
      const gram = randomForm(next, rank, rank + next(2));
      if (gram.some((row, i) => row[i]! > 30n)) continue;
      const expected = plainColumns(gram);
      for (const form of [dualForm(gram)!, dualForm(gram, 0n)!]) {
        const all = admissibleColumns(form, 'all', BOUNDS)!;
        expect({ gram, columns: texts(form, all.entries) }).toEqual({ gram, columns: expected });
        const gapOf = (text: string) => exactGap(form, text.split(' ').map(Number));
        const unit = admissibleColumns(form, 'unit', BOUNDS)!;
        expect({ gram, unit: texts(form, unit.entries) }).toEqual({
          gram,
          unit: expected.filter((c) => gapOf(c) === 0n),
        });
        const square = admissibleColumns(form, 'square', BOUNDS)!;
        const isSquare = (a: bigint) => Number.isInteger(Math.sqrt(Number(a)));
        expect({ gram, square: texts(form, square.entries) }).toEqual({
          gram,
          square: expected.filter((c) => isSquare(gapOf(c))),
        });
        expect(square.admissible).toBe(all.count);
        square.roots.forEach((y, i) =>
          expect(BigInt(y) ** 2n).toBe(exactGap(form, square.entries.subarray(i * rank, (i + 1) * rank))),
        );
      }
    }
  });

  it('stop at a bound instead of giving a part', () => {
    const form = dualForm([[8n]])!;
    expect(admissibleColumns(form, 'all', { steps: 1, vectors: 9 })).toBeNull();
    expect(admissibleColumns(form, 'all', { steps: 99, vectors: 1 })).toBeNull();
    expect(admissibleColumns(form, 'all', { steps: 99, vectors: 2 })!.count).toBe(2);
  });
});

function leavesOf(form: DualForm, dimension: number): string[] {
  const excess = dimension - form.rank;
  const columns = admissibleColumns(form, excess === 0 ? 'unit' : excess === 1 ? 'square' : 'all', BOUNDS)!;
  const ladder = new FramesLadder(frameRoot(form, columns, excess), dimension);
  const leaves: string[] = [];
  let depth = 0;
  ladder.begin(0);
  while (depth >= 0) {
    if (ladder.next(depth, Infinity) === LISTED.done) depth -= 1;
    else if (ladder.childIsLeaf(depth)) leaves.push(JSON.stringify(ladder.orbit(depth).columns));
    else {
      ladder.descend(depth);
      depth += 1;
      ladder.begin(depth);
    }
  }
  return leaves.sort();
}

describe('frames', () => {
  it('by residues are those in doubles, n = r, r + 1, r + 2, on 150 random forms', () => {
    const next = sequence(32);
    for (let k = 0; k < 150; k += 1) {
      const rank = 1 + next(5);
      const excess = next(3);
      const gram = randomForm(next, rank, rank + excess);
      const [doubles, residues] = [dualForm(gram)!, dualForm(gram, 0n)!];
      expect([doubles.direct === null, residues.direct === null]).toEqual([false, true]);
      const expected = leavesOf(doubles, rank + excess);
      expect(expected.length).toBeGreaterThan(0);
      expect({ gram, excess, leaves: leavesOf(residues, rank + excess) }).toEqual({ gram, excess, leaves: expected });
    }
  });
});
