/**
 * The pair test (Donald, Trans. AMS 367 (2015)): two embeddings A_1, A_2 at n = r, repeats allowed, with (A_1 | A_2) onto
 * Hom(Λ, Z): all r nonzero elementary divisors are 1. Onto means full rank modulo every prime that divides det Λ, so each
 * embedding stands for its column space modulo these primes, and equal spaces are tried once.
 */
import { elementaryDivisors, inverseModulo, modulo, trialFactor } from '@palmette/exact';
import type { Lattice } from './build.ts';
import type { ListedEmbedding, TestAnswer } from './tests-on-list.ts';

/** Classes of column spaces above which pairs are not tried. It bounds the memory too: of a class the first embedding's spaces are kept. */
const MAX_CLASSES = 1_500;

/** Takes the embeddings one by one and keeps one of each class. */
export class PairTest {
  private readonly primes: readonly bigint[] | null;
  /** For each class of column spaces the number of its first embedding and its space modulo each prime. */
  private readonly classes = new Map<string, { readonly first: number; readonly spaces: bigint[][][] }>();
  private taken = 0;
  private tooMany = false;

  constructor(private readonly lattice: Lattice) {
    const { primes, rest } = trialFactor(lattice.determinant);
    this.primes = rest === 1n ? primes.map(({ prime }) => prime) : null;
  }

  take({ rows }: ListedEmbedding): void {
    const no = this.taken;
    this.taken += 1;
    if (this.primes === null || this.tooMany) return;
    const spaces = this.primes.map((prime) => columnSpace(rows, prime));
    const key = JSON.stringify(spaces, (_, x: unknown) => (typeof x === 'bigint' ? x.toString() : x));
    if (this.classes.has(key)) return;
    this.classes.set(key, { first: no, spaces });
    if (this.classes.size <= MAX_CLASSES) return;
    this.tooMany = true;
    this.classes.clear();
  }

  answer(complete: boolean): TestAnswer {
    const { primes, lattice } = this;
    if (primes === null) return { undecided: true, reason: 'the determinant could not be factored' };
    if (this.tooMany)
      return {
        undecided: true,
        reason: `${this.taken} embeddings have more than ${MAX_CLASSES} classes of column spaces`,
      };
    const classes = [...this.classes.values()];
    for (const [at, one] of classes.entries()) {
      for (const other of classes.slice(at)) {
        const onto = primes.every(
          (prime, k) => rankModulo([...one.spaces[k]!, ...other.spaces[k]!], prime) === lattice.rank,
        );
        if (onto) return { passes: true, witness: [one.first, other.first] };
      }
    }
    return complete
      ? { passes: false }
      : { undecided: true, reason: 'no pair of the list is onto, and the list is not complete' };
  }
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
