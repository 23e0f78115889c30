/** The labels at the left of a trellis. */
import type { TextRun } from './marks.ts';
import type { Wire } from './order-wires.ts';

/** e_1, or e_{2…6} for equal wires that hang as one line. @param numbers of the columns, where they come from elsewhere */
export function wireLabel({ first, last, columns }: Wire, numbers?: readonly number[]): readonly TextRun[] {
  const [from, to] = numbers === undefined ? [first, last] : [numbers[columns[0]!]!, numbers[columns.at(-1)!]!];
  return [{ text: 'e' }, { text: from === to ? `${from}` : `${from}…${to}`, level: 'low' }];
}

export function radicalLabel(count: number, folded: boolean): readonly TextRun[] {
  return [{ text: folded ? `rad (${count})` : 'rad' }];
}
