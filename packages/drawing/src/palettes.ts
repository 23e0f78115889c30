/** Colours for files: a tone without a colour is left out. Screens use their own style sheet instead. */
import type { Tone } from './marks.ts';

export type Palette = Readonly<Record<Tone, string | null>>;

export const LIGHT: Palette = {
  paper: '#FBF8F1',
  hair: '#E2DACA',
  wire: '#B8AB92',
  edge: '#8C8370',
  soft: '#5C5548',
  ink: '#1F1B16',
  leaf: '#2E6A3B',
  damson: '#65397A',
};

/** Ink on white: solid against hollow carries the sign, wires are 30 % black, nothing behind them. */
export const PRINT: Palette = {
  paper: '#FFFFFF',
  hair: null,
  wire: '#B3B3B3',
  edge: '#000000',
  soft: '#000000',
  ink: '#000000',
  leaf: '#000000',
  damson: '#000000',
};
