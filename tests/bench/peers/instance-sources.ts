/**
 * Sources of the three classes. Stars: a centre of weight c + 1 with two complementary legs a and a* and the chain c, c₁, …
 * as centre and third leg; over the rationals such a star is ⟨1⟩^ℓ + the chain (ℓ vertices in the two legs), and it
 * embeds in Z^(n + ℓ) where the chain embeds in Z^n. Scrambled forms: B·U·Bᵀ after a random unimodular change of basis,
 * U the identity (made to embed) or E8 + identity (the same form over the rationals, so that arithmetic does not exclude it).
 */
import type { Source } from '@palmette/lattice';
import { dualWeights, fractionOf } from './chain-weights.ts';
import type { Random } from './random.ts';

export function chainOf(weights: readonly number[]): Source {
  const { p, q } = fractionOf(weights);
  return { kind: 'fraction', p: String(p), q: String(q), orientation: 'chain' };
}

export function starOf(leg: readonly number[], chain: readonly number[]): Source {
  const vertices = [{ name: 'c', weight: -(chain[0]! + 1) }];
  const edges: [string, string][] = [];
  [leg, dualWeights(leg), chain.slice(1)].forEach((weights, l) =>
    weights.forEach((weight, i) => {
      vertices.push({ name: `${l}.${i}`, weight: -weight });
      edges.push([i === 0 ? 'c' : `${l}.${i - 1}`, `${l}.${i}`]);
    }),
  );
  return { kind: 'tree', vertices, edges };
}

/** A leg of which leg and dual leg have `length` vertices in all. */
export function legOfTotal(length: number, random: Random): number[] {
  for (;;) {
    const leg = Array.from({ length: random.between(1, length - 1) }, () => random.pick([2, 2, 3, 3, 4]));
    if (leg.length + leg.reduce((sum, a) => sum + a - 2, 1) === length) return leg;
  }
}

/** Gram of E8 + ⟨1⟩^(size − 8), or of ⟨1⟩^size. */
export function unimodular(size: number, withE8: boolean): number[][] {
  const gram = Array.from({ length: size }, (_, i) => Array.from({ length: size }, (_, j) => Number(i === j)));
  if (!withE8) return gram;
  const join = (i: number, j: number) => (gram[i]![j] = gram[j]![i] = -1);
  for (let i = 0; i < 8; i += 1) gram[i]![i] = 2;
  for (let i = 0; i < 6; i += 1) join(i, i + 1);
  join(2, 7);
  return gram;
}

/** B·U·Bᵀ for a random rank × size matrix B with entries in −bound..bound, in a scrambled basis. */
export function scrambledForm(rank: number, u: readonly (readonly number[])[], bound: number, random: Random): Source {
  for (;;) {
    const b = Array.from({ length: rank }, () => u.map(() => random.between(-bound, bound)));
    if (!isIndependent(b)) continue;
    for (let step = 0; step < 3 * rank; step += 1) {
      const [i, j] = [random.between(0, rank - 1), random.between(0, rank - 1)];
      const sign = random.pick([-1, 1]);
      if (i !== j) b[i] = b[i]!.map((x, k) => x + sign * b[j]![k]!);
    }
    return { kind: 'matrix', rows: b.map((x) => b.map((y) => pairing(x, u, y))) };
  }
}

function pairing(x: readonly number[], u: readonly (readonly number[])[], y: readonly number[]): number {
  return x.reduce((sum, a, i) => sum + a * u[i]!.reduce((s, v, j) => s + v * y[j]!, 0), 0);
}

/** Independence over a large prime is independence; a dependent result only draws again. */
function isIndependent(rows: readonly (readonly number[])[]): boolean {
  const prime = 1_000_003;
  const left = rows.map((row) => row.map((x) => ((x % prime) + prime) % prime));
  const width = rows[0]!.length;
  let done = 0;
  for (let column = 0; column < width && done < left.length; column += 1) {
    const pivot = left.findIndex((row, i) => i >= done && row[column] !== 0);
    if (pivot < 0) continue;
    [left[done], left[pivot]] = [left[pivot]!, left[done]!];
    for (let i = done + 1; i < left.length; i += 1) {
      const [a, b] = [left[done]![column]!, left[i]![column]!];
      left[i] = left[i]!.map((x, k) => (((x * a - left[done]![k]! * b) % prime) + prime) % prime);
    }
    done += 1;
  }
  return done === left.length;
}
