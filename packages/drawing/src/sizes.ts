/** The sizes of a trellis, from a handful of vertices to sixty. */

export type SizeName = 'roomy' | 'narrow' | 'close' | 'fine';

export interface Size {
  readonly name: SizeName;
  /** Pitch of the vertices and of the wires. */
  readonly px: number;
  readonly py: number;
  /** Length of a leaf, and the width that drives its curve. */
  readonly leafLength: number;
  readonly leafWidth: number;
  readonly font: number;
  readonly stem: number;
  readonly stemTone: 'ink' | 'edge';
  readonly wire: number;
  readonly hollow: number;
  readonly dot: number;
}

const BIG = { stem: 1.6, stemTone: 'ink', wire: 1.6, hollow: 1.7, dot: 3.8 } as const;

/** `narrow` is roomy where the page is 360 px wide. */
export const SIZES: Readonly<Record<SizeName, Size>> = {
  roomy: { name: 'roomy', px: 56, py: 38, leafLength: 23, leafWidth: 12, font: 15, ...BIG },
  narrow: { name: 'narrow', px: 37, py: 29, leafLength: 17, leafWidth: 9, font: 13, ...BIG },
  close: { name: 'close', px: 32, py: 24, leafLength: 15, leafWidth: 8, font: 12, ...BIG },
  fine: {
    name: 'fine',
    px: 18,
    py: 16,
    leafLength: 11,
    leafWidth: 6,
    font: 10,
    stem: 1.1,
    stemTone: 'edge',
    wire: 1.1,
    hollow: 1.1,
    dot: 2.4,
  },
};

/** Vertices and lines up to which a size is used. */
const BOUNDS = [
  ['roomy', 12, 14],
  ['close', 30, 24],
  ['fine', 60, 40],
] as const;

/**
 * The size for so many vertices and lines, or null: then the matrix is shown, and a trellis of one vertex with its
 * neighbours.
 */
export function sizeFor(vertices: number, lines: number): SizeName | null {
  return BOUNDS.find(([, r, n]) => vertices <= r && lines <= n)?.[0] ?? null;
}
