/**
 * Tests over a list of embeddings, taken one by one: the list may be longer than memory. Each is answered, or said not to
 * apply with the reason, or left undecided with the reason; none is dropped.
 */
import type { Lattice } from './build.ts';
import { changemakerAnswer } from './test-changemaker.ts';
import { complementAnswer, torsionIndex } from './test-complement.ts';
import { cubiquityAnswer } from './test-cubiquity.ts';
import { DoubleOrbitTest } from './test-double-orbits.ts';
import { metaboliserAnswer, PairTest } from './test-pair.ts';

export interface ListedEmbedding {
  /** N rows of the nonzero columns. */
  readonly rows: readonly (readonly bigint[])[];
  readonly zeros: number;
}

export type TestAnswer = { readonly [key: string]: unknown } | string;

export interface ListQuestion {
  readonly lattice: Lattice;
  /** Null for target any: each embedding has its own width. */
  readonly dimension: number | null;
  readonly tests: readonly string[];
}

/** A test of the list as a whole: sees every embedding once and keeps no more than a bounded part. */
interface OverList {
  take(embedding: ListedEmbedding): void;
  answer(complete: boolean): TestAnswer;
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

/** How a test of the whole list is opened. */
const OVER: Readonly<Record<string, (question: ListQuestion) => OverList>> = {
  pair: ({ lattice, dimension }) => {
    if (lattice.rank === 0) return known({ applies: false, reason: 'the rank is 0' });
    if (dimension !== lattice.rank) return known({ applies: false, reason: 'n is not the rank' });
    return new PairTest(lattice);
  },
  doubleOrbits: ({ lattice }) =>
    lattice.rank === 0 ? known({ applies: false, reason: 'the rank is 0' }) : new DoubleOrbitTest(lattice),
};

const known = (answer: TestAnswer): OverList => ({ take: () => {}, answer: () => answer });
const notComputed = () => known({ undecided: true, reason: 'this release does not compute it' });

export class TestsOnList {
  private readonly over: ReadonlyMap<string, OverList>;
  private taken = 0;

  constructor(private readonly question: ListQuestion) {
    const whole = question.tests.filter((name) => EACH[name] === undefined);
    this.over = new Map(whole.map((name) => [name, (OVER[name] ?? notComputed)(question)]));
  }

  /** The answers about this embedding. */
  take(embedding: ListedEmbedding): Record<string, TestAnswer> {
    this.taken += 1;
    for (const test of this.over.values()) test.take(embedding);
    const answers: Record<string, TestAnswer> = {};
    for (const name of this.question.tests) {
      const one = EACH[name];
      if (one === undefined) continue;
      answers[name] = onOne(this.question.lattice, embedding, one);
      if (name === 'complement') answers['index'] = torsionIndex(embedding);
    }
    return answers;
  }

  /** The answers about the list as a whole, once all were taken. */
  overall(complete: boolean): Record<string, TestAnswer> {
    const answers: Record<string, TestAnswer> = {};
    for (const name of this.question.tests) {
      const over = this.over.get(name);
      if (over !== undefined) answers[name] = over.answer(complete);
      else if (this.taken === 0) answers[name] = { applies: false, reason: 'there is no embedding' };
    }
    return answers;
  }
}

function onOne(lattice: Lattice, embedding: ListedEmbedding, test: (typeof EACH)[string]): TestAnswer {
  if (lattice.rank === 0) return { applies: false, reason: 'the rank is 0' };
  const excess = (embedding.rows[0]?.length ?? 0) + embedding.zeros - lattice.rank;
  if (test.excess !== null && excess !== test.excess)
    return { applies: false, reason: test.excess === 0 ? 'n is not the rank' : `n is not the rank + ${test.excess}` };
  return test.answer(lattice, embedding);
}
