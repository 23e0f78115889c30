/**
 * Tests over a list of embeddings. Each is answered, or said not to apply with the reason, or left undecided with
 * the reason; none is dropped.
 */
import type { Lattice } from './build.ts';
import { changemakerAnswer } from './test-changemaker.ts';
import { complementAnswer, torsionIndex } from './test-complement.ts';
import { cubiquityAnswer } from './test-cubiquity.ts';
import { metaboliserAnswer, pairAnswer } from './test-pair.ts';

export interface ListedEmbedding {
  /** N rows of the nonzero columns. */
  readonly rows: readonly (readonly bigint[])[];
  readonly zeros: number;
}

export type TestAnswer = { readonly [key: string]: unknown } | string;

export interface TestsOnListInput {
  readonly lattice: Lattice;
  /** Null for target any: each embedding has its own width. */
  readonly dimension: number | null;
  readonly embeddings: readonly ListedEmbedding[];
  readonly complete: boolean;
  readonly tests: readonly string[];
}

export interface ListTests {
  readonly overall: Record<string, TestAnswer>;
  readonly each: Record<string, TestAnswer>[];
}

/** What a test of one embedding needs of n, and its answer. */
const EACH: Readonly<
  Record<
    string,
    { readonly excess: number | null; readonly answer: (lattice: Lattice, e: ListedEmbedding) => TestAnswer }
  >
> = {
  complement: { excess: null, answer: (_, e) => complementAnswer(e) },
  metaboliser: { excess: 0, answer: (_, e) => metaboliserAnswer(e) },
  cubiquity: { excess: 0, answer: (_, e) => cubiquityAnswer(e) },
  changemaker: { excess: 1, answer: changemakerAnswer },
};

export function testsOnList(input: TestsOnListInput): ListTests {
  const overall: Record<string, TestAnswer> = {};
  const each: Record<string, TestAnswer>[] = input.embeddings.map(() => ({}));
  for (const name of input.tests) {
    const one = EACH[name];
    if (one !== undefined) {
      if (input.embeddings.length === 0) overall[name] = { applies: false, reason: 'there is no embedding' };
      input.embeddings.forEach((embedding, i) => {
        each[i]![name] = onOne(input.lattice, embedding, one);
        if (name === 'complement') each[i]!['index'] = torsionIndex(embedding);
      });
    } else
      overall[name] =
        name === 'pair' ? overPairs(input) : { undecided: true, reason: 'this release does not compute it' };
  }
  return { overall, each };
}

function onOne(lattice: Lattice, embedding: ListedEmbedding, test: (typeof EACH)[string]): TestAnswer {
  if (lattice.rank === 0) return { applies: false, reason: 'the rank is 0' };
  const excess = (embedding.rows[0]?.length ?? 0) + embedding.zeros - lattice.rank;
  if (test.excess !== null && excess !== test.excess)
    return { applies: false, reason: test.excess === 0 ? 'n is not the rank' : `n is not the rank + ${test.excess}` };
  return test.answer(lattice, embedding);
}

function overPairs(input: TestsOnListInput): TestAnswer {
  if (input.lattice.rank === 0) return { applies: false, reason: 'the rank is 0' };
  if (input.dimension !== input.lattice.rank) return { applies: false, reason: 'n is not the rank' };
  return pairAnswer(input.lattice, input.embeddings, input.complete);
}
