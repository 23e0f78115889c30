/** Continued fractions p/q = a_1 − 1/(a_2 − 1/(…)) with a_i ≥ 2 (Hirzebruch; Jung). */
import { MAX_RANK, SourceFault } from './source.ts';

/**
 * The entries a_1, a_2, … of p/q.
 * @param p @param q coprime, p > q > 0
 * @throws SourceFault `limit` if there are more entries than rows are allowed
 */
export function hirzebruchJung(p: bigint, q: bigint): bigint[] {
  const entries: bigint[] = [];
  let [a, b] = [p, q];
  while (b > 0n) {
    if (entries.length === MAX_RANK)
      throw new SourceFault('', `the chain of ${p}/${q} has more than ${MAX_RANK} vertices`, 'limit');
    const ceiling = (a + b - 1n) / b;
    entries.push(ceiling);
    [a, b] = [b, ceiling * b - a];
  }
  return entries;
}
