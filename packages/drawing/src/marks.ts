/**
 * What a picture is made of. Layouts give lists of marks; the screen, SVG and TikZ draw the same list. Lengths are CSS
 * pixels, y grows downwards, colours are names of tokens.
 */

export type Tone = 'paper' | 'hair' | 'wire' | 'edge' | 'soft' | 'ink' | 'leaf' | 'damson';

export type Role =
  | 'hair'
  | 'wire'
  | 'label'
  | 'count'
  | 'bare'
  | 'stem'
  | 'foot'
  | 'edge'
  | 'dot'
  | 'weight'
  | 'leaf'
  | 'fruit'
  | 'radical'
  | 'product'
  | 'name';

/** What a mark belongs to; vertices by their place in the drawing, wires by their line, edges by their number in the input. */
export interface Part {
  readonly role: Role;
  readonly vertex?: number;
  readonly wire?: number;
  readonly edge?: number;
}

export interface LineMark {
  readonly kind: 'line';
  readonly x1: number;
  readonly y1: number;
  readonly x2: number;
  readonly y2: number;
  readonly stroke: Tone;
  readonly width: number;
  readonly dash?: readonly [number, number];
  readonly part: Part;
}

/** M x y, L x y, C x1 y1 x2 y2 x y, or Z. */
export type PathStep =
  | readonly ['M', number, number]
  | readonly ['L', number, number]
  | readonly ['C', number, number, number, number, number, number]
  | readonly ['Z'];

export interface PathMark {
  readonly kind: 'path';
  readonly steps: readonly PathStep[];
  readonly fill: Tone | null;
  readonly stroke: Tone | null;
  readonly width: number;
  readonly dash?: readonly [number, number];
  readonly part: Part;
}

/** A circle, or a capsule if `halfWidth` is greater than `radius`. */
export interface RoundMark {
  readonly kind: 'round';
  readonly x: number;
  readonly y: number;
  readonly radius: number;
  readonly halfWidth: number;
  readonly fill: Tone | null;
  readonly stroke: Tone | null;
  readonly width: number;
  readonly part: Part;
}

/** A piece of a line of text; `low` is a subscript, `high` a superscript. */
export interface TextRun {
  readonly text: string;
  readonly level?: 'low' | 'high';
}

export interface TextMark {
  readonly kind: 'text';
  readonly x: number;
  /** Baseline. */
  readonly y: number;
  readonly size: number;
  readonly weight: 400 | 500 | 600;
  readonly anchor: 'start' | 'middle' | 'end';
  readonly fill: Tone;
  readonly runs: readonly TextRun[];
  /** The whole, where the text is cut. */
  readonly tip?: string;
  readonly part: Part;
}

export type Mark = LineMark | PathMark | RoundMark | TextMark;

export interface Drawing {
  readonly width: number;
  readonly height: number;
  readonly marks: readonly Mark[];
}

/** Sub- and superscripts, as a part of the text's size. */
export const SCRIPT_SIZE = 0.72;
/** How far they are moved, as a part of the text's size. */
export const LOW_SHIFT = 0.22;
export const HIGH_SHIFT = 0.36;
