/** A fruit: the mark of an entry other than 0 and ±1, big enough for its number. */
import { numeral, textWidth, type Numeral } from './numerals.ts';
import type { Size } from './sizes.ts';

export interface Fruit {
  readonly radius: number;
  /** Greater than the radius for a capsule; 0 for ±1, which is a leaf. */
  readonly halfWidth: number;
  /** Without sign. */
  readonly text: Numeral;
  readonly font: number;
}

/** A circle around its number, a capsule from three digits on. */
export function fruitSize(size: Size, value: bigint): Fruit {
  const font = 0.86 * size.font;
  const text = numeral(value < 0n ? -value : value);
  if (value === 1n || value === -1n) return { radius: 0, halfWidth: 0, text, font };
  const least = 0.46 * size.leafLength;
  const around = textWidth([{ text: text.text }], font) / 2 + 0.16 * size.leafLength;
  if (text.text.length < 3) return { radius: Math.max(least, around), halfWidth: Math.max(least, around), text, font };
  return { radius: Math.max(least, 0.62 * font), halfWidth: Math.max(least, around), text, font };
}
