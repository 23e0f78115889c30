/**
 * What a search carries from one stage to the next beside its plan: the stage in hand, the results so far, and, once a
 * certificate is being checked in parcels, the facts that hold if it is verified. The store keeps it as a text.
 */
import type { AssembleEnd, SettledFacts, StageAhead } from '@palmette/threads';

type Stage = StageAhead['stage'];
type StageResult = StageAhead['results'][number];
export type ToCheck = Pick<Extract<AssembleEnd, { kind: 'to check' }>, 'facts'> & {
  /** Names the certificate to the threads that check it. */
  readonly sha256: string;
};

export interface StageBook {
  readonly stage: Stage;
  readonly results: readonly StageResult[];
  readonly toCheck: ToCheck | null;
}

export class NoBook extends Error {
  override readonly name = 'NoBook';
}

export function writeBook(book: StageBook): string {
  return JSON.stringify(book, (_, value: unknown) => (typeof value === 'bigint' ? value.toString() : value));
}

/** @throws NoBook if the search has not got past `choosing` */
export function readBook(text: string): StageBook {
  const book = JSON.parse(text) as Partial<StageBook>;
  if (book.stage === undefined || book.results === undefined) throw new NoBook('the search has no stage yet');
  return { stage: book.stage, results: book.results, toCheck: book.toCheck ? revived(book.toCheck) : null };
}

function revived({ facts, sha256 }: ToCheck): ToCheck {
  const count = (value: unknown) => (value === null ? null : BigInt(value as string));
  return { sha256, facts: { ...facts, orbits: count(facts.orbits), total: count(facts.total) } satisfies SettledFacts };
}
