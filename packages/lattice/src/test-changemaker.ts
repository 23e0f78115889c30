/**
 * Changemaker complement (Greene, Ann. of Math. 177 (2013)): at n = r + 1 the complement is spanned by a primitive σ. With
 * |σ|² = det Q and its entries 0 ≤ s_1 ≤ … ≤ s_n, s_i ≤ 1 + s_1 + … + s_{i−1}, it is a changemaker, and 2g = det Q − Σ s_i.
 */
import { abs } from '@palmette/exact';
import type { Lattice } from './build.ts';
import { complementBasis } from './test-complement.ts';
import type { ListedEmbedding, TestAnswer } from './tests-on-list.ts';

export function changemakerAnswer(lattice: Lattice, embedding: ListedEmbedding): TestAnswer {
  const basis = complementBasis(embedding);
  const entries = basis.length === 1 ? basis[0]!.map(abs) : [1n];
  const sigma = [...entries, ...new Array<bigint>(basis.length === 1 ? embedding.zeros : 0).fill(0n)].sort((a, b) =>
    a < b ? -1 : a > b ? 1 : 0,
  );
  const norm = sigma.reduce((sum, x) => sum + x * x, 0n);
  let reach = 0n;
  const steps = sigma.every((x) => {
    const within = x <= 1n + reach;
    reach += x;
    return within;
  });
  const changemaker = norm === lattice.determinant && steps;
  return {
    sigma: sigma.map(String),
    changemaker,
    ...(changemaker ? { genus: ((lattice.determinant - reach) / 2n).toString() } : {}),
  };
}
