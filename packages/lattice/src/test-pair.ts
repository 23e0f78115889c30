/**
 * The pair test (Donald, Trans. AMS 367 (2015)): two embeddings A_1, A_2 at n = r, repeats allowed, with (A_1 | A_2) onto
 * Hom(Λ, Z): all r nonzero elementary divisors are 1. Onto means full rank modulo every prime that divides det Λ, so each
 * embedding stands for its column space modulo these primes, and equal spaces are tried once.
 */
import { elementaryDivisors, inverseModulo, modulo, trialFactor } from '@palmette/exact';
import type { Lattice } from './build.ts';
import type { ListedEmbedding, TestAnswer } from './tests-on-list.ts';

/** Classes of column spaces above which pairs are not tried. */
const MAX_CLASSES = 1_500;

export function pairAnswer(lattice: Lattice, embeddings: readonly ListedEmbedding[], complete: boolean): TestAnswer {
  const { primes, rest } = trialFactor(lattice.determinant);
  if (rest !== 1n) return { undecided: true, reason: 'the determinant could not be factored' };
  const spaces = embeddings.map((e) => primes.map(({ prime }) => columnSpace(e.rows, prime)));
  const first = new Map<string, number>();
  spaces.forEach((space, i) => {
    const key = JSON.stringify(space, (_, x: unknown) => (typeof x === 'bigint' ? x.toString() : x));
    if (!first.has(key)) first.set(key, i);
  });
  const classes = [...first.values()];
  if (classes.length > MAX_CLASSES)
    return { undecided: true, reason: `${classes.length} classes of column spaces, above ${MAX_CLASSES}` };
  for (const i of classes) {
    for (const j of classes) {
      if (j < i) continue;
      const onto = primes.every(
        ({ prime }, k) => rankModulo([...spaces[i]![k]!, ...spaces[j]![k]!], prime) === lattice.rank,
      );
      if (onto) return { passes: true, witness: [i, j] };
    }
  }
  return complete
    ? { passes: false }
    : { undecided: true, reason: 'no pair of the list is onto, and the list is not complete' };
}

/** Reduced echelon basis of the span of the columns modulo p. */
function columnSpace(rows: readonly (readonly bigint[])[], p: bigint): bigint[][] {
  const width = rows[0]?.length ?? 0;
  return echelon(
    Array.from({ length: width }, (_, j) => rows.map((row) => modulo(row[j]!, p))),
    p,
  );
}

function rankModulo(vectors: readonly (readonly bigint[])[], p: bigint): number {
  return echelon(
    vectors.map((v) => [...v]),
    p,
  ).length;
}

function echelon(vectors: bigint[][], p: bigint): bigint[][] {
  const width = vectors[0]?.length ?? 0;
  let top = 0;
  for (let j = 0; j < width && top < vectors.length; j += 1) {
    const pivot = vectors.findIndex((v, i) => i >= top && v[j] !== 0n);
    if (pivot < 0) continue;
    [vectors[top], vectors[pivot]] = [vectors[pivot]!, vectors[top]!];
    const scale = inverseModulo(vectors[top]![j]!, p)!;
    vectors[top] = vectors[top]!.map((x) => (x * scale) % p);
    vectors.forEach((v, i) => {
      if (i === top || v[j] === 0n) return;
      const factor = v[j]!;
      for (let k = j; k < width; k += 1) v[k] = modulo(v[k]! - factor * vectors[top]![k]!, p);
    });
    top += 1;
  }
  return vectors.slice(0, top);
}

/** Z^n/Λ as a subgroup of the discriminant group, for n = r: its order and elementary divisors. */
export function metaboliserAnswer(embedding: ListedEmbedding): TestAnswer {
  const divisors = elementaryDivisors(embedding.rows).filter((d) => d !== 1n);
  return { order: divisors.reduce((product, d) => product * d, 1n).toString(), divisors: divisors.map(String) };
}
