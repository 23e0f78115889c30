/** Targets, scopes and dimensions in words. `Z^9` is set with a real superscript by whoever shows it. */
import type { Scope, Target } from '@palmette/contracts';
import { integerInWords } from './numbers.ts';

/** “Z^9”; a dimension of several signs is put in braces so that all of it is raised. */
export function space(n: number | string): string {
  const text = integerInWords(n);
  return text.length === 1 ? `Z^${text}` : `Z^{${text}}`;
}

/** The target as the sentence of a question names it. @param rank null while it is not known */
export function targetInWords(target: Target, rank: number | null): string {
  if ('dimension' in target) return space(target.dimension);
  if ('excess' in target) {
    if (rank !== null) return space(rank + target.excess);
    return target.excess === 0 ? 'Z^{rank}' : `Z^{rank + ${integerInWords(target.excess)}}`;
  }
  if ('least' in target) {
    return target.least.upTo === undefined
      ? 'the least Z^n'
      : `the least Z^n, n ≤ ${integerInWords(target.least.upTo)}`;
  }
  return 'any Z^n';
}

/** “P(3, 5, −7) in Z^9”: a question's name where it has no title. */
export function questionName(sourceLabel: string, target: Target, rank: number | null): string {
  return `${sourceLabel} in ${targetInWords(target, rank)}`;
}

export function scopeInWords(scope: Scope): string {
  return scope === 'all' ? 'every way' : 'one way';
}
