/** The second blank as it is typed, and the target that it means. */
import { LIMITS, type Target } from '@palmette/contracts';

export type TargetKind = 'excess' | 'dimension' | 'least' | 'any';

export interface TargetDraft {
  kind: TargetKind;
  excess: string;
  dimension: string;
  /** Empty: no bound. */
  upTo: string;
}

export function rankTarget(): TargetDraft {
  return { kind: 'excess', excess: '0', dimension: '', upTo: '' };
}

export type TargetReading = { readonly target: Target } | { readonly fault: string };

export function readTarget(draft: TargetDraft): TargetReading {
  switch (draft.kind) {
    case 'any':
      return { target: { any: true } };
    case 'excess':
      return read(draft.excess, 'k', (excess) => ({ excess }));
    case 'dimension':
      return read(draft.dimension, 'n', (dimension) => ({ dimension }));
    case 'least':
      return draft.upTo.trim() === ''
        ? { target: { least: {} } }
        : read(draft.upTo, 'the bound', (upTo) => ({ least: { upTo } }));
  }
}

function read(text: string, name: string, make: (n: number) => Target): TargetReading {
  const plain = text.trim();
  if (!/^\d{1,9}$/.test(plain) || Number(plain) > LIMITS.dimension) {
    const found = plain === '' ? 'nothing' : JSON.stringify(plain.slice(0, 20));
    return { fault: `Refused: expected ${name} as a whole number from 0 to 1 000 000, found ${found}.` };
  }
  return { target: make(Number(plain)) };
}

export function fillTarget(draft: TargetDraft, target: Target): void {
  if ('dimension' in target) Object.assign(draft, { kind: 'dimension', dimension: String(target.dimension) });
  else if ('excess' in target) Object.assign(draft, { kind: 'excess', excess: String(target.excess) });
  else if ('least' in target)
    Object.assign(draft, { kind: 'least', upTo: target.least.upTo === undefined ? '' : String(target.least.upTo) });
  else draft.kind = 'any';
}
