/** What a solver is asked and what it says, ours and peers alike. */

export interface Problem {
  /** Positive definite, of full rank; LLL-reduced where the source is a matrix. */
  readonly gram: readonly (readonly number[])[];
  readonly dimension: number;
  readonly scope: 'one' | 'all';
  /** The question document, for ours. */
  readonly document: string;
}

export interface Answer {
  readonly outcome: 'embeds' | 'excluded' | 'over the limit' | 'failed';
  readonly cpuSeconds: number;
  /** Complete lists only. */
  readonly orbits?: number;
  /** Figures worth a line: nodes, vectors, sizes, method; why it failed. */
  readonly figures: Readonly<Record<string, string | number>>;
}

export interface Solver {
  readonly name: string;
  /** The first program that it needs and that is not installed. */
  readonly missing: string | null;
  readonly scopes: readonly ('one' | 'all')[];
  /** CPU seconds of a trivial problem: starting its programs. */
  startUp(): number;
  solve(problem: Problem, cpuLimit: number): Answer;
}

/** The figure of a solver stopped at the limit. */
export function overLimit(cpuSeconds: number, figures: Answer['figures'] = {}): Answer {
  return { outcome: 'over the limit', cpuSeconds, figures };
}

export class WrongWitness extends Error {
  override readonly name = 'WrongWitness';
}

/** @throws WrongWitness unless A·Aᵀ is the Gram matrix */
export function verifyWitness(gram: Problem['gram'], a: readonly (readonly number[])[]): void {
  const fits = gram.every((row, i) =>
    row.every((entry, j) => a[i]!.reduce((sum, x, k) => sum + x * a[j]![k]!, 0) === entry),
  );
  if (!fits) throw new WrongWitness(`not an embedding: ${JSON.stringify(a)}`);
}

/** The middle one. */
export const median = (list: readonly number[]) => [...list].sort((x, y) => x - y)[Math.floor(list.length / 2)]!;
