/** Index and orthogonal complement of an embedding (MATHEMATICS of the product, section 5: Smith form of A; complement for n > r). */
import { dot, elementaryDivisors, hermiteBasis, lllGram, splitOff, type BigMatrix } from '@palmette/exact';
import type { ListedEmbedding, TestAnswer } from './tests-on-list.ts';

/** Above this rank a complement is not written down: zero columns alone give thousands of rows. */
const MAX_COMPLEMENT_RANK = 100;

/** Order of the torsion of Z^n/image. */
export function torsionIndex(embedding: ListedEmbedding): string {
  return elementaryDivisors(embedding.rows)
    .reduce((product, d) => product * d, 1n)
    .toString();
}

/** A basis of the integer vectors of Z^n (nonzero columns only) that are orthogonal to the image. */
export function complementBasis(embedding: ListedEmbedding): BigMatrix {
  const width = embedding.rows[0]?.length ?? 0;
  const image = hermiteBasis(embedding.rows);
  return splitOff(image, width).inverse.slice(0, width - image.length);
}

export function complementAnswer(embedding: ListedEmbedding): TestAnswer {
  const basis = complementBasis(embedding);
  const rank = basis.length + embedding.zeros;
  if (rank === 0) return { applies: false, reason: 'n is the rank' };
  if (rank > MAX_COMPLEMENT_RANK)
    return { undecided: true, reason: `the complement has rank ${rank}, above ${MAX_COMPLEMENT_RANK}` };
  const inner = basis.length === 0 ? [] : lllGram(basis.map((x) => basis.map((y) => dot(x, y)))).gram;
  const gram = Array.from({ length: rank }, (_, i) =>
    Array.from({ length: rank }, (_, j) => (inner[i]?.[j] ?? (i === j && i >= inner.length ? 1n : 0n)).toString()),
  );
  return { gram };
}
