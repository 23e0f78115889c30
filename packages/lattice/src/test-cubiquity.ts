/**
 * Cubiquity of a full-rank sublattice Λ of Z^n: whether {0,1}^n meets every coset (Greene–Owens, Alternating links, rational
 * balls, and cube tilings, 2022). Sums of cosets of e_1, …, e_n are gathered one coordinate after the other.
 */
import { floorDivide, hermiteBasis, type BigMatrix } from '@palmette/exact';
import type { ListedEmbedding, TestAnswer } from './tests-on-list.ts';

const MAX_INDEX = 200_000n;

export function cubiquityAnswer(embedding: ListedEmbedding): TestAnswer {
  const basis = hermiteBasis(embedding.rows);
  const n = basis.length;
  const index = basis.reduce((product, row, i) => product * row[i]!, 1n);
  if (index <= MAX_INDEX) {
    const missed = missedCoset(basis, Number(index));
    return missed === null ? { cubiquitous: true } : { cubiquitous: false, missed: missed.map(Number) };
  }
  if (index > 2n ** BigInt(n)) return { cubiquitous: false, reason: `the index ${index} is above 2^${n}` };
  return { undecided: true, reason: `the index ${index} is above ${MAX_INDEX}` };
}

/** A representative of a coset without a vertex of the cube, or null. `basis` is in Hermite form. */
function missedCoset(basis: BigMatrix, index: number): bigint[] | null {
  const pivots = basis.map((row, i) => row[i]!);
  const number = (v: readonly bigint[]) => v.reduce((at, x, i) => at * Number(pivots[i]) + Number(x), 0);
  const vector = (at: number): bigint[] => {
    const out: bigint[] = [];
    for (let i = pivots.length - 1, rest = at; i >= 0; i -= 1) {
      out[i] = BigInt(rest % Number(pivots[i]));
      rest = Math.floor(rest / Number(pivots[i]));
    }
    return out;
  };
  const reduce = (v: bigint[]): bigint[] => {
    basis.forEach((row, i) => {
      const q = floorDivide(v[i]!, row[i]!);
      if (q !== 0n) for (let j = i; j < v.length; j += 1) v[j]! -= q * row[j]!;
    });
    return v;
  };
  const hit = new Uint8Array(index);
  hit[0] = 1;
  for (let j = 0; j < basis.length; j += 1) {
    const before = [...hit.keys()].filter((at) => hit[at] === 1);
    if (before.length === index) break;
    for (const at of before) {
      const v = vector(at);
      v[j]! += 1n;
      hit[number(reduce(v))] = 1;
    }
  }
  const missed = hit.indexOf(0);
  return missed < 0 ? null : vector(missed);
}
