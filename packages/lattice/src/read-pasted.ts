/**
 * Matrices as people paste them: rows split by line feeds, semicolons, LaTeX's \\ or brackets; entries by spaces,
 * commas, tabs or &. The reading is exact: an entry that is no integer is refused with its row and place.
 */
import { SourceFault, type SourceInteger } from './source.ts';

const INTEGER = /^-?(?:0|[1-9][0-9]*)$/;
const ENVIRONMENT = /\\(?:begin|end)\s*\{[a-zA-Z]*matrix\*?\}|\\(?:begin|end)\s*\{array\}(?:\s*\{[^}]*\})?/g;
const DECORATION = /\\left|\\right|\\bigl|\\bigr|\\,|\\;|\\!|\\quad|\\hline|\$|\\\[|\\\]/g;

/**
 * Reads a square or ragged list of rows; symmetry and shape are judged later, where the places are known.
 * @throws SourceFault naming row and entry
 */
export function readPasted(text: string): { readonly rows: SourceInteger[][] } {
  const plain = text
    .replaceAll(/[\u2212\u2013\u2010\u2011]/g, '-')
    .replaceAll('\u00a0', ' ')
    .replaceAll(ENVIRONMENT, ' ')
    .replaceAll(/\\\\(?:\[[^\]]*\])?/g, '\n')
    .replaceAll(DECORATION, ' ')
    .trim();
  const rows = splitRows(plain).map((row) => row.split(/[\s,&\t]+/).filter((entry) => entry !== ''));
  const kept = rows.filter((row) => row.length > 0);
  if (kept.length === 0) throw new SourceFault('/rows', 'expected the rows of a matrix, found none');
  return { rows: kept.map((row, i) => row.map((entry, j) => readEntry(entry, i, j))) };
}

/** Nested brackets decide the rows if there are any, else semicolons, else lines. */
function splitRows(text: string): string[] {
  const inner = /^[[({]([\s\S]*)[\])}]$/.exec(text)?.[1] ?? text;
  if (/[[({]/.test(inner)) return [...inner.matchAll(/[[({]([^[\](){}]*)[\])}]/g)].map((m) => m[1]!);
  const separator = inner.includes(';') ? ';' : '\n';
  const rows = inner.split(separator);
  if (separator === '\n' && rows.length === 1) return squareRows(inner);
  return rows;
}

/** One line of N² entries is read as N rows. */
function squareRows(line: string): string[] {
  const entries = line.split(/[\s,&]+/).filter((entry) => entry !== '');
  const size = Math.round(Math.sqrt(entries.length));
  if (size < 2 || size * size !== entries.length) return [line];
  return Array.from({ length: size }, (_, i) => entries.slice(i * size, (i + 1) * size).join(' '));
}

function readEntry(text: string, i: number, j: number): SourceInteger {
  const entry = text.replace(/^\+/, '').replace(/^"(.*)"$/, '$1');
  if (!INTEGER.test(entry) || entry === '-0') {
    throw new SourceFault(
      `/rows/${i}/${j}`,
      `row ${i + 1}, entry ${j + 1}: expected an integer, found ${JSON.stringify(text.slice(0, 40))}`,
    );
  }
  const small = Number(entry);
  return Number.isSafeInteger(small) ? small : entry;
}
