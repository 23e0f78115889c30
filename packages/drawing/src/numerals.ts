/** Integers as the drawings write them: the true minus, cut above six digits, with a width that is known without a screen. */
import { SCRIPT_SIZE, type TextRun } from './marks.ts';

export type DrawnInteger = number | string | bigint;

/** Digits that a drawing shows of one number. */
const SHOWN_DIGITS = 6;
/** Tabular digits of the typeface, as a part of its size; other signs are about as wide. */
const SIGN_WIDTH = 0.6;

export interface Numeral {
  readonly text: string;
  /** The whole number, where the text is cut. */
  readonly tip?: string;
}

/** “−7”, “123…” with “1234567, 7 digits” as its tip. */
export function numeral(value: DrawnInteger): Numeral {
  const whole = String(value).replace('-', '−');
  const digits = whole.replace('−', '');
  if (digits.length <= SHOWN_DIGITS) return { text: whole };
  return { text: `${whole.slice(0, whole.length - digits.length + 3)}…`, tip: `${whole}, ${digits.length} digits` };
}

/** With a plus where it is positive, for lists of signs. */
export function signed(value: bigint): string {
  return value > 0n ? `+${numeral(value).text}` : numeral(value).text;
}

/** Width of a line of text, about: exact for digits. */
export function textWidth(runs: readonly TextRun[], size: number): number {
  return runs.reduce(
    (sum, run) => sum + run.text.length * SIGN_WIDTH * size * (run.level === undefined ? 1 : SCRIPT_SIZE),
    0,
  );
}

export function isZero(value: DrawnInteger): boolean {
  return value === 0 || value === '0' || value === 0n;
}

/** A count with its digits in groups: “1 000 001”. */
export function grouped(count: number): string {
  const digits = String(count);
  return digits.length <= 4 ? digits : digits.replaceAll(/\B(?=(?:\d{3})+$)/g, '\u202f');
}
