/**
 * Tests over a list of embeddings. Each is answered, or said not to apply with the reason, or left undecided with
 * the reason; none is dropped.
 */
import type { Lattice } from './build.ts';

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

export function testsOnList(input: TestsOnListInput): ListTests {
  const overall: Record<string, TestAnswer> = {};
  for (const name of input.tests) overall[name] = { undecided: true, reason: 'this release does not compute it' };
  return { overall, each: input.embeddings.map(() => ({})) };
}
