/**
 * How a drawing comes onto paper: at most 16 cm wide, and in a size whose letters are at least 6 pt; if none is, the
 * finest on a page turned to its side.
 */
import { layTrellis, type Trellis, type TrellisInput, type TrellisOptions } from './trellis.ts';
import { SIZES, type SizeName } from './sizes.ts';

export interface Fit {
  /** Printer's points (1/72.27 inch) for one pixel of the drawing. */
  readonly pointsPerPixel: number;
  readonly widthCm: number;
  readonly turned: boolean;
}

const WIDEST_CM = 16;
/** On a page turned to its side. */
const WIDEST_TURNED_CM = 24;
const LEAST_LETTER_PT = 6;
const POINTS_PER_CM = 72.27 / 2.54;
/** A pixel is 1/96 inch: nothing is drawn larger than on the screen. */
const POINTS_PER_PIXEL = 72.27 / 96;

export function fitWidth(width: number, widestCm: number): number {
  return Math.min(POINTS_PER_PIXEL, (widestCm * POINTS_PER_CM) / width);
}

/** A trellis for a paper with the way it fits on the page. */
export function trellisOnPaper(
  input: TrellisInput,
  options: Omit<TrellisOptions, 'size' | 'products'> = {},
  from: SizeName = 'roomy',
): { readonly trellis: Trellis; readonly fit: Fit } {
  const names = ['roomy', 'close', 'fine'] as const;
  const start = names.indexOf(from === 'narrow' ? 'roomy' : from);
  for (const size of names.slice(start)) {
    const trellis = layTrellis(input, { ...options, size });
    const pointsPerPixel = fitWidth(trellis.width, WIDEST_CM);
    if (SIZES[size].font * pointsPerPixel >= LEAST_LETTER_PT)
      return { trellis, fit: fitOf(trellis.width, pointsPerPixel, false) };
  }
  const trellis = layTrellis(input, { ...options, size: 'fine' });
  return { trellis, fit: fitOf(trellis.width, fitWidth(trellis.width, WIDEST_TURNED_CM), true) };
}

function fitOf(width: number, pointsPerPixel: number, turned: boolean): Fit {
  return { pointsPerPixel, widthCm: (width * pointsPerPixel) / POINTS_PER_CM, turned };
}
