/** How numbers are written: digits grouped by thin spaces, the true minus, counts that can have hundreds of digits. */

/** A thin space at which no line breaks. */
const THIN = '\u202f';
const MINUS = '−';

/** Longer numbers are cut on a line of text: the first digits, an ellipsis, and how many digits there are. */
const DIGITS_ON_A_LINE = 24;

/**
 * “185 794 560”, “−41”. Four digits stand together.
 * @param value an integer; a string of decimal digits of any length is taken as it is
 */
export function integerInWords(value: number | string | bigint): string {
  const text = String(value);
  const negative = text.startsWith('-');
  const digits = negative ? text.slice(1) : text;
  const grouped = digits.length <= 4 ? digits : digits.replaceAll(/\B(?=(?:\d{3})+$)/g, THIN);
  return negative ? MINUS + grouped : grouped;
}

/** The same, cut beyond 24 digits: “349 274… (82 digits)”. The whole number belongs beside it, in full, on wish. */
export function countInWords(value: string | bigint): string {
  const text = String(value);
  if (text.length <= DIGITS_ON_A_LINE) return integerInWords(text);
  return `${text.slice(0, 3)}${THIN}${text.slice(3, 6)}… (${text.length} digits)`;
}

/** True if `countInWords` does not show every digit. */
export function isCut(value: string | bigint): boolean {
  return String(value).length > DIGITS_ON_A_LINE;
}

/** “1 orbit”, “12 orbits”. @param many left out: the word with an s */
export function plural(value: number | string | bigint, one: string, many = `${one}s`): string {
  return `${countInWords(String(value))} ${String(value) === '1' ? one : many}`;
}

/** “61%”. Never 0% or 100% of something that has begun and not ended. @param share between 0 and 1 */
export function shareInWords(share: number): string {
  if (share > 0 && share < 0.01) return 'under 1%';
  if (share < 1 && share > 0.99) return 'over 99%';
  return `${Math.round(share * 100)}%`;
}

/** “1.2 MB”, “840 bytes”. Decimal units. */
export function bytesInWords(bytes: number): string {
  if (bytes < 1_000) return plural(bytes, 'byte');
  const [size, unit] =
    bytes < 1_000_000 ? [bytes / 1e3, 'kB'] : bytes < 1e9 ? [bytes / 1e6, 'MB'] : [bytes / 1e9, 'GB'];
  return `${size < 10 ? size.toFixed(1) : Math.round(size)} ${unit}`;
}

/** Two or three leading digits, for rates: 172 431 → “172 000”. */
export function roughlyInWords(value: number): string {
  const step = 10 ** Math.max(0, Math.floor(Math.log10(Math.max(1, value))) - 2);
  return integerInWords(Math.round(value / step) * step);
}

/** “2”, “2 and 17”, “2, 3 and 17”. */
export function listInWords(items: readonly string[]): string {
  return items.length <= 1 ? (items[0] ?? '') : `${items.slice(0, -1).join(', ')} and ${items.at(-1)}`;
}
