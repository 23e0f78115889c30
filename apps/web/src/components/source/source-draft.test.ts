import { describe, expect, it } from 'vitest';
import type { Source } from '@palmette/contracts';
import { buildLattice, SourceFault } from '@palmette/lattice';
import { faultSentence, placeInWords } from './place-in-words.ts';
import { readPastedSource } from './read-pasted-source.ts';
import { emptyDraft, fillDraft, isEmpty, readDraft, type SourceDraft } from './source-draft.ts';

const draft = (change: Partial<SourceDraft>): SourceDraft => ({ ...emptyDraft(), ...change });
function faultOf(change: Partial<SourceDraft>): SourceFault {
  try {
    readDraft(draft(change));
  } catch (error) {
    if (error instanceof SourceFault) return error;
    throw error;
  }
  throw new Error('was read');
}

describe('forms become sources', () => {
  it.each<[string, Partial<SourceDraft>, Source]>([
    [
      'a matrix',
      { kind: 'matrix', matrix: { text: '2 -1\n-1 2' } },
      {
        kind: 'matrix',
        rows: [
          [2, -1],
          [-1, 2],
        ],
      },
    ],
    [
      'a fraction',
      { kind: 'fraction', fraction: { text: ' 17 / 5 ', orientation: 'dual' } },
      { kind: 'fraction', p: 17, q: 5, orientation: 'dual' },
    ],
    [
      'Seifert invariants',
      { kind: 'seifert', seifert: { centre: '−2', slopes: '1/2, 1/3; 6/7', orientation: 'entered' } },
      {
        kind: 'seifert',
        centre: -2,
        fibres: [
          [1, 2],
          [1, 3],
          [6, 7],
        ],
        orientation: 'entered',
      },
    ],
    [
      'a pretzel',
      { kind: 'montesinos', montesinos: { text: 'P(3, 5, −7)', orientation: 'definite' } },
      { kind: 'montesinos', pretzel: [3, 5, -7], orientation: 'definite' },
    ],
    [
      'slopes, one of them an integer',
      { kind: 'montesinos', montesinos: { text: '2/5 3/7 -4/3 1', orientation: 'definite' } },
      {
        kind: 'montesinos',
        slopes: [
          [2, 5],
          [3, 7],
          [-4, 3],
          [1, 1],
        ],
        orientation: 'definite',
      },
    ],
    [
      'a diagram',
      { kind: 'diagram', diagram: { text: '[1,4,2,5][3,6,4,1]\n5 2 6 3', colouring: '1' } },
      {
        kind: 'diagram',
        pd: [
          [1, 4, 2, 5],
          [3, 6, 4, 1],
          [5, 2, 6, 3],
        ],
        colouring: 1,
      },
    ],
    [
      'a graph',
      { kind: 'graph', graph: { text: '0-1, 1–2\n(2, 0)', lattice: 'flows' } },
      {
        kind: 'graph',
        edges: [
          [0, 1],
          [1, 2],
          [2, 0],
        ],
        lattice: 'flows',
      },
    ],
    [
      'a sum',
      { kind: 'sum', sum: { text: '17/5\n\n{"kind":"fraction","p":7,"q":2,"orientation":"dual"}' } },
      {
        kind: 'sum',
        of: [
          { kind: 'fraction', p: 17, q: 5, orientation: 'chain' },
          { kind: 'fraction', p: 7, q: 2, orientation: 'dual' },
        ],
      },
    ],
    [
      'a drawn tree',
      {
        kind: 'tree',
        tree: {
          vertices: [
            { name: 'a', weight: '-2' },
            { name: 'b', weight: '−12345678901234567890' },
          ],
          edges: [['a', 'b', -1]],
        },
      },
      {
        kind: 'tree',
        vertices: [
          { name: 'a', weight: -2 },
          { name: 'b', weight: '-12345678901234567890' },
        ],
        edges: [['a', 'b', -1]],
      },
    ],
  ])('%s', (_, change, source) => {
    expect(readDraft(draft(change))).toEqual(source);
    // and back into the form, to the same source
    const filled = emptyDraft();
    fillDraft(filled, source);
    expect(readDraft(filled)).toEqual(source);
    expect(isEmpty(filled)).toBe(false);
    expect(isEmpty(draft({ kind: source.kind }))).toBe(true);
  });

  it('refuses with place, expectation and finding', () => {
    expect(faultOf({ kind: 'matrix', matrix: { text: '2 -1\n1.5 2' } }).path).toBe('/rows/1/0');
    expect(faultOf({ kind: 'tree', tree: { vertices: [{ name: 'a', weight: '-2x' }], edges: [] } })).toMatchObject({
      path: '/vertices/0/weight',
      message: 'expected an integer, found "-2x"',
    });
    expect(faultOf({ kind: 'seifert', seifert: { centre: '', slopes: '1/2', orientation: 'definite' } }).path).toBe(
      '/centre',
    );
    expect(
      faultOf({ kind: 'seifert', seifert: { centre: '-1', slopes: '1/2, x', orientation: 'definite' } }).path,
    ).toBe('/fibres/1');
    expect(faultOf({ kind: 'diagram', diagram: { text: '1 2 3', colouring: '0' } }).message).toContain(
      'found 3 integers',
    );
    expect(faultOf({ kind: 'sum', sum: { text: '17/5\nnonsense' } }).path).toBe('/of/1');
    expect(faultOf({ kind: 'fraction', fraction: { text: '17/5 7/2', orientation: 'chain' } }).message).toContain(
      'one fraction',
    );
    expect(faultOf({ kind: 'matrix', matrix: { text: '1e3 0\n0 1' } }).path).toBe('/rows/0/0');
  });

  it('puts places into words', () => {
    expect(placeInWords('/rows/1/2')).toBe('row 2, entry 3');
    expect(placeInWords('/of/1/vertices/0/weight')).toBe('summand 2, vertex 1, weight');
    expect(placeInWords('/edges/3/0')).toBe('edge 4, end 1');
    expect(faultSentence({ path: '/rows/2', message: 'row 3 has 4 entries, expected 5' })).toBe(
      'Refused: row 3 has 4 entries, expected 5.',
    );
    expect(faultSentence({ path: '/vertices/0/weight', message: 'expected an integer, found "x"' })).toBe(
      'Refused, vertex 1, weight: expected an integer, found "x".',
    );
    expect(faultSentence({ path: '', message: 'expected a definite form' })).toBe('Refused: expected a definite form.');
  });
});

describe('pasting', () => {
  it.each([
    ['rows with spaces', '2 -1 0\n-1 2 -1\n0 -1 2'],
    ['nested brackets', '[[2, -1, 0], [-1, 2, -1], [0, -1, 2]]'],
    ['semicolons', '2 -1 0; -1 2 -1; 0 -1 2'],
    ['a CSV file', '2,-1,0\r\n-1,2,-1\r\n0,-1,2\r\n'],
    ['LaTeX', '\\begin{pmatrix} 2 & -1 & 0 \\\\ -1 & 2 & -1 \\\\ 0 & -1 & 2 \\end{pmatrix}'],
    ['a LaTeX matrix with true minus signs', '$\\begin{bmatrix}2&−1&0\\\\−1&2&−1\\\\0&−1&2\\end{bmatrix}$'],
  ])('knows a matrix as %s', (_, text) => {
    const pasted = readPastedSource(text);
    expect(pasted.kind).toBe('source');
    const source = (pasted as { source: Source }).source;
    expect(source.kind).toBe('matrix');
    expect(buildLattice(source).determinant).toBe(4n);
  });

  it('knows a question document and a source in JSON', () => {
    const question = {
      format: 'palmette.question/1',
      source: { kind: 'fraction', p: 17, q: 5 },
      target: { least: {} },
      scope: 'one',
    };
    expect(readPastedSource(JSON.stringify(question))).toMatchObject({
      kind: 'question',
      question: { target: { least: {} }, scope: 'one' },
    });
    expect(readPastedSource('{"kind":"matrix","rows":[[3]]}')).toMatchObject({ source: { kind: 'matrix' } });
    expect(() => readPastedSource('{"kind":"matrix","rows":[[1.5]]}')).toThrow();
    expect(() => readPastedSource('hello')).toThrow(SourceFault);
  });
});
