/** Lists of integers and of fractions as people type them: exact, and refused with their place. */
import { integerFault, type WireInteger } from '@palmette/contracts';
import { SourceFault } from '@palmette/lattice';

const MINUS_SIGNS = /[\u2212\u2013\u2010\u2011]/g;
const INTEGER = /^[+-]?\d+$/;

/** The one spelling: a number where it is safe, else decimal digits. */
export function canonicalInteger(value: WireInteger): WireInteger {
  const small = Number(value);
  return Number.isSafeInteger(small) ? small : String(BigInt(value));
}

/** @throws SourceFault at `path` */
export function readInteger(text: string, path: string, expected: string): WireInteger {
  const plain = text.replaceAll(MINUS_SIGNS, '-').trim();
  if (!INTEGER.test(plain))
    throw new SourceFault(
      path,
      `expected ${expected}, found ${plain === '' ? 'nothing' : JSON.stringify(plain.slice(0, 40))}`,
    );
  const value = canonicalInteger(BigInt(plain.replace('+', '')).toString());
  const fault = integerFault(value);
  if (fault !== undefined) throw new SourceFault(path, fault, 'limit');
  return value;
}

/**
 * All integers of a text in which commas, semicolons, spaces and brackets only part them.
 * @param dashes a dash between two digits parts them too (edges as 0–1)
 * @throws SourceFault naming the first entry that is none
 */
export function integersIn(text: string, path: string, dashes = false): WireInteger[] {
  const parted = dashes ? text.replaceAll(/(\d)\s*[-\u2212\u2013\u2010\u2011]\s*(?=\d)/g, '$1 ') : text;
  const entries = parted.split(/[\s,;()[\]{}]+/).filter((entry) => entry !== '');
  if (entries.length === 0) throw new SourceFault(path, 'expected a list of integers, found nothing');
  return entries.map((entry, i) => readInteger(entry, path, `an integer as entry ${i + 1}`));
}

/**
 * Fractions a/b, parted by commas, semicolons or spaces; an integer a stands for a/1.
 * @throws SourceFault naming the first entry that is none
 */
export function pairsIn(text: string, path: string): [WireInteger, WireInteger][] {
  const tidy = text.replaceAll(/\s*\/\s*/g, '/');
  const entries = tidy.split(/[\s,;()[\]]+/).filter((entry) => entry !== '');
  return entries.map((entry, i) => {
    const [a, b = '1', more] = entry.split('/');
    const at = path === '' ? '' : `${path}/${i}`;
    if (more !== undefined) throw new SourceFault(at, `expected a fraction, found ${JSON.stringify(entry)}`);
    const expected = `a fraction as entry ${i + 1}`;
    return [readInteger(a!, at, expected), readInteger(b, at, expected)];
  });
}
