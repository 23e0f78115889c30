/** What the tests on embeddings say, in words. The shapes are those of FORMAT.md, section 8. */
import type { TestName } from '@palmette/contracts';
import { countInWords, integerInWords, listInWords, plural } from './numbers.ts';

export type TestAnswer = string | { readonly [key: string]: unknown };

const NAMES: Readonly<Record<TestName | 'index', string>> = {
  complement: 'complement',
  metaboliser: 'metaboliser',
  pair: 'pair test',
  cubiquity: 'cubiquity',
  changemaker: 'changemaker',
  halfChangemaker: 'half-integer changemaker',
  dInvariants: 'd-invariants',
  doubleOrbits: 'double orbits',
  index: 'index in its span',
};

export function testInWords(name: string): string {
  return (NAMES as Readonly<Record<string, string>>)[name] ?? name;
}

/** One answer in words. A shape that is not known is shown as it stands in the certificate, never dropped. */
export function testAnswerInWords(name: string, answer: TestAnswer): string {
  if (typeof answer === 'string') return countInWords(answer);
  if (answer.applies === false) return `does not apply: ${String(answer.reason ?? 'no reason given')}`;
  if (answer.undecided === true) return `undecided: ${String(answer.reason ?? 'no reason given')}`;
  if (Array.isArray(answer.gram)) return gramInWords(answer.gram as readonly (readonly unknown[])[]);
  if (name === 'cubiquity' && typeof answer.cubiquitous === 'boolean') {
    if (answer.cubiquitous) return 'cubiquitous: every coset is hit';
    const missed = Array.isArray(answer.missed)
      ? `, for instance (${answer.missed
          .map(String)
          .map((x) => x.replace('-', '−'))
          .join(', ')})`
      : '';
    return `not cubiquitous: a coset is missed${missed}`;
  }
  if (name === 'doubleOrbits' && typeof answer.count === 'string' && typeof answer.groupOrder === 'string')
    return `${plural(answer.count, 'double orbit')}; the lattice has ${plural(answer.groupOrder, 'automorphism')}`;
  if (typeof answer.passes === 'boolean') {
    const witness = Array.isArray(answer.witness)
      ? ` with embeddings ${listInWords(answer.witness.map((i) => String(Number(i) + 1)))}`
      : '';
    return answer.passes ? `passes${witness}` : 'fails';
  }
  return JSON.stringify(answer);
}

/** “<41>” for one row, the rows in brackets otherwise. */
function gramInWords(rows: readonly (readonly unknown[])[]): string {
  if (rows.length === 0) return 'none: n is the rank';
  const entry = (x: unknown) => (/^-?\d+$/.test(String(x)) ? integerInWords(String(x)) : String(x));
  if (rows.length === 1) return `<${entry(rows[0]![0])}>`;
  return `[${rows.map((row) => `[${row.map(entry).join(', ')}]`).join(', ')}]`;
}

export interface FoldedAnswer {
  readonly title: string;
  readonly note: string;
  /** Rows on lines of their own, entries apart by spaces of even width. */
  readonly matrices: readonly string[];
  /** Matrices that are not shown. */
  readonly left: number;
}

/** Matrices of an answer that are set out on a screen, and entries that each may have. */
const SHOWN_MATRICES = 12;
const SHOWN_ENTRIES = 2_500;
const SHOWN_PLACES = 20;

/** What stands behind an answer and is shown only on wish: the generators of the automorphisms. */
export function testFolded(name: string, answer: TestAnswer): FoldedAnswer | null {
  if (name !== 'doubleOrbits' || typeof answer === 'string' || !Array.isArray(answer.generators)) return null;
  const generators = answer.generators as readonly (readonly (readonly unknown[])[])[];
  const shown = generators.slice(0, SHOWN_MATRICES).filter((rows) => rows.length ** 2 <= SHOWN_ENTRIES);
  const places = Array.isArray(answer.representatives) ? answer.representatives.map((i) => String(Number(i) + 1)) : [];
  const listed = places.length > SHOWN_PLACES ? `${places.slice(0, SHOWN_PLACES).join(', ')} …` : listInWords(places);
  return {
    title: plural(generators.length, 'generator'),
    note: [
      ...(places.length === 0 ? [] : [`One of each: ${places.length === 1 ? 'embedding' : 'embeddings'} ${listed}.`]),
      'That they generate the whole group is worked out by the search and not repeated by the checker.',
    ].join(' '),
    matrices: shown.map(matrixText),
    left: generators.length - shown.length,
  };
}

function matrixText(rows: readonly (readonly unknown[])[]): string {
  const text = rows.map((row) => row.map((x) => String(x).replace('-', '−')));
  const width = Math.max(...text.flat().map((x) => x.length));
  return text.map((row) => row.map((x) => x.padStart(width)).join(' ')).join('\n');
}
