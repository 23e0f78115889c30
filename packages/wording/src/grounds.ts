/** Why a verdict holds, in sentences. The statements are those of FORMAT.md, section 7. */
import type { Ground } from '@palmette/contracts';
import { integerInWords, listInWords } from './numbers.ts';
import { space } from './places.ts';

/** What is known about an exclusion; `determinant` is a decimal string where it is at hand. */
export interface ExclusionFacts {
  readonly ground: Ground;
  /** Null: in no Z^n at all. */
  readonly dimension: number | null;
  readonly rank: number | null;
  readonly determinant?: string | undefined;
  readonly primes?: readonly string[] | undefined;
  /** Admissible columns up to sign, and the dimension of their span. */
  readonly columns?: { readonly vectors: string; readonly spanned: number } | undefined;
}

const SHORT: Readonly<Record<Ground, string>> = {
  embedding: 'an embedding',
  exhaustion: 'exhaustion',
  dimension: 'the dimension',
  determinant: 'the determinant',
  hilbert: 'Hilbert symbols',
  column: 'admissible columns',
};

/** “exhaustion”, “the determinant”, for a table and after “Ground:”. */
export function groundInShort(ground: string): string {
  return (SHORT as Readonly<Record<string, string>>)[ground] ?? ground;
}

/** One sentence that says why Λ is excluded from this Z^n. */
export function exclusionReason(facts: ExclusionFacts): string {
  const { dimension, rank } = facts;
  switch (facts.ground) {
    case 'dimension':
      return rank === null || dimension === null
        ? 'The dimension is below the rank.'
        : `${rank === 1 ? 'A vector does' : `${integerInWords(rank)} independent vectors do`} not fit into ${space(dimension)}.`;
    case 'determinant':
      return facts.determinant === undefined
        ? 'At n = rank the determinant has to be a square, and it is not one.'
        : `At n = rank the determinant has to be a square; ${integerInWords(facts.determinant)} is not one.`;
    case 'hilbert':
      return `Over the rationals the form is not represented by ${dimension === null ? 'n' : integerInWords(dimension)} squares: ${primesInWords(facts.primes)}.`;
    case 'column':
      return facts.columns === undefined
        ? 'The columns that an embedding could have do not span the space: there are too few of them.'
        : columnReason(facts.columns, dimension, rank);
    case 'exhaustion':
      return dimension === null
        ? 'Every case was gone through, at a width that is enough for any n; none ends in an embedding.'
        : 'Every case was gone through; none ends in an embedding.';
    case 'embedding':
      return 'An embedding is listed.';
  }
}

/** At n = rank every column has norm exactly 1 in the dual, otherwise at most 1. */
function columnReason(
  { vectors, spanned }: NonNullable<ExclusionFacts['columns']>,
  dimension: number | null,
  rank: number | null,
): string {
  const bound = dimension !== null && dimension === rank ? 'c^TQ^{−1}c = 1' : 'c^TQ^{−1}c ≤ 1';
  if (vectors === '0')
    return `Every column c of an embedding that is not zero has ${bound}, and no integer column does.`;
  const only = vectors === '1' ? '1 integer column' : `${integerInWords(vectors)} integer columns`;
  return `Up to sign only ${only} could occur in an embedding (${bound}), and the dimension of their span is ${spanned}, where ${rank ?? 'the rank'} is needed.`;
}

function primesInWords(primes: readonly string[] | undefined): string {
  if (primes === undefined || primes.length === 0) return 'Hilbert symbols fail';
  const list = listInWords(primes.map(integerInWords));
  return primes.length === 1
    ? `the Hilbert symbols fail at the prime ${list}`
    : `the Hilbert symbols fail at the primes ${list}`;
}

/** The same as half a sentence, for “And 9 is least: 41 is not a square, so Z^8 is excluded.” */
export function exclusionClause(facts: ExclusionFacts): string {
  const so = facts.dimension === null ? 'no Z^n is possible' : `${space(facts.dimension)} is excluded`;
  switch (facts.ground) {
    case 'determinant':
      return facts.determinant === undefined
        ? `the determinant is not a square, so ${so}`
        : `${integerInWords(facts.determinant)} is not a square, so ${so}`;
    case 'hilbert':
      return `${so} by ${primesInWords(facts.primes).replace(/^the Hilbert symbols fail/, 'Hilbert symbols')}`;
    case 'column':
      return `${so}, because the columns that could occur do not span`;
    case 'dimension':
      return `${so}, being smaller than the rank`;
    default:
      return `${so} by exhaustion`;
  }
}
