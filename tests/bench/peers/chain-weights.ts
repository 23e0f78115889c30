/**
 * Weights of linear plumbings, as positive numbers. A chain that is made to embed in Z^r is grown from [4] by
 * [a, …, b] → [2, a, …, b + 1] or [a + 1, …, b, 2] (its determinant is m², and the new vertex is a difference of two unit
 * vectors of which one is new), or is the dual of one such.
 */
import { hirzebruchJung } from '@palmette/lattice';
import type { Random } from './random.ts';

export function fractionOf(weights: readonly number[]): { p: bigint; q: bigint } {
  let [p, q] = [1n, 0n];
  for (const weight of [...weights].reverse()) [p, q] = [BigInt(weight) * p - q, p];
  return { p, q };
}

export function dualWeights(weights: readonly number[]): number[] {
  const { p, q } = fractionOf(weights);
  return hirzebruchJung(p, p - q).map(Number);
}

/** Rank r, embeds in Z^r. */
export function squareChain(rank: number, random: Random): number[] {
  const dual = random.between(0, 1) === 1;
  let weights = [4];
  while (weights.length < (dual ? rank - 2 : rank)) {
    if (random.between(0, 1) === 1) weights.reverse();
    weights = [2, ...weights.slice(0, -1), weights.at(-1)! + 1];
  }
  return dual ? dualWeights(weights) : weights;
}

/** Rank r, determinant a square, weights at most 9; nothing else is known of it. */
export function chainOfSquareDeterminant(rank: number, random: Random): number[] {
  for (;;) {
    const m = random.between(rank, 40 * rank);
    const q = random.between(2, m * m - 2);
    const weights = smallWeights(m * m, q, rank);
    if (weights !== null && isCoprime(m * m, q)) return weights;
  }
}

/** The chain of p/q if it has that rank and no weight over 9. */
function smallWeights(p: number, q: number, rank: number): number[] | null {
  const weights: number[] = [];
  for (let [a, b] = [p, q]; b > 0;) {
    const weight = Math.ceil(a / b);
    if (weight > 9 || weights.length === rank) return null;
    weights.push(weight);
    [a, b] = [b, weight * b - a];
  }
  return weights.length === rank ? weights : null;
}

function isCoprime(a: number, b: number): boolean {
  while (b !== 0) [a, b] = [b, a % b];
  return a === 1;
}

/** Rank r, weights 2 to 5, two as likely as all others together: about the mean weight 3 at which chains of full rank embed. */
export function randomChain(rank: number, random: Random): number[] {
  return Array.from({ length: rank }, () => random.pick([2, 2, 2, 3, 4, 5]));
}
