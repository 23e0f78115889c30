/** Why a forced method cannot answer what is asked, as far as the page itself can tell. */
import type { MethodName, Target } from '@palmette/contracts';

/** Frames answer for so many dimensions above the rank (FORMAT.md, section 7). */
const FRAMES_UP_TO = 2;

/** @returns the sentence at the field; empty if nothing speaks against the method */
export function methodFault(method: MethodName | '', target: Target | null, rank: number | null): string {
  if (method !== 'frames' || target === null || 'least' in target) return '';
  const refused = (found: string) =>
    `Refused: frames need n from the rank to the rank + ${FRAMES_UP_TO}, found ${found}.`;
  if ('any' in target) return refused('any n');
  if ('excess' in target) return target.excess <= FRAMES_UP_TO ? '' : refused(`the rank + ${target.excess}`);
  // below the rank arithmetic answers
  if (rank === null || target.dimension <= rank + FRAMES_UP_TO) return '';
  return refused(`${target.dimension} at rank ${rank}`);
}
