/** A verdict in words: first the heading, then the line under it. Each names target and completeness. */
import type { Ground, Scope, Target, Verdict } from '@palmette/contracts';
import { exclusionClause, exclusionReason, type ExclusionFacts } from './grounds.ts';
import { countInWords, plural } from './numbers.ts';
import { space } from './places.ts';

export interface VerdictFacts {
  readonly verdict: Verdict;
  readonly ground: Ground | null;
  readonly target: Target;
  readonly scope: Scope;
  readonly rank: number | null;
  readonly dimension: number | null;
  readonly orbits: string | null;
  readonly total: string | null;
  readonly complete: boolean;
  /** From the certificate, where it is at hand: determinant of the reduced lattice, and the exclusion it carries. */
  readonly determinant?: string | undefined;
  readonly exclusion?: Pick<ExclusionFacts, 'ground' | 'dimension' | 'primes' | 'columns'> | undefined;
}

/** “Embeds in Z^9, in exactly one way up to symmetry”. */
export function verdictHeading(facts: VerdictFacts): string {
  if (facts.verdict === 'open') return 'Open';
  if (facts.verdict === 'excluded') {
    return facts.dimension === null
      ? 'Excluded: it embeds in no Z^n'
      : `Excluded: it does not embed in ${space(facts.dimension)}`;
  }
  const where = facts.dimension === null ? 'some Z^n' : space(facts.dimension);
  const least = 'least' in facts.target ? ', the least' : '';
  if (!facts.complete || facts.orbits === null) return `Embeds in ${where}${least}`;
  return `Embeds in ${where}${least}, in exactly ${ways(facts.orbits)} up to symmetry`;
}

function ways(orbits: string): string {
  return orbits === '1' ? 'one way' : `${countInWords(orbits)} ways`;
}

/** The line under the heading: completeness and count, or the reason. */
export function verdictLead(facts: VerdictFacts): string {
  if (facts.verdict === 'open') return 'Nothing can be concluded.';
  if (facts.verdict === 'excluded') {
    const below = 'least' in facts.target && facts.dimension !== null ? ' So it embeds in no smaller one either.' : '';
    return facts.ground === null
      ? 'The list is complete and empty.'
      : exclusionReason({ ...facts, ...facts.exclusion, ground: facts.ground }) + below;
  }
  const least = leastClause(facts);
  if (!facts.complete || facts.orbits === null) return `One embedding was found; others were not looked for.${least}`;
  const total = facts.total === null ? '' : `, ${plural(facts.total, 'embedding')} in all`;
  const widths = facts.dimension === null ? ' Each stands in its own width, without zero columns.' : '';
  return `Complete list: ${plural(facts.orbits, 'orbit')}${total}.${widths}${least}`;
}

function leastClause(facts: VerdictFacts): string {
  if (!('least' in facts.target) || facts.dimension === null || facts.dimension === 0) return '';
  const n = facts.dimension;
  if (facts.exclusion === undefined) return ` And ${n} is least: ${space(n - 1)} is excluded.`;
  return ` And ${n} is least: ${exclusionClause({ ...facts.exclusion, rank: facts.rank, determinant: facts.determinant })}.`;
}
