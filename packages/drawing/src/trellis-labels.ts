/** The labels at the left of a trellis. */
import type { TextRun } from './marks.ts';
import type { Wire } from './order-wires.ts';

/** e_1, or e_{2…6} for equal wires that hang as one line. */
export function wireLabel({ first, last }: Pick<Wire, 'first' | 'last'>): readonly TextRun[] {
  return [{ text: 'e' }, { text: first === last ? `${first}` : `${first}…${last}`, level: 'low' }];
}

export function radicalLabel(count: number, folded: boolean): readonly TextRun[] {
  return [{ text: folded ? `rad (${count})` : 'rad' }];
}
