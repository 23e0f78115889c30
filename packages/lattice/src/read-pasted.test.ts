/** Pasted matrices and typed sources. */
import { describe, expect, it } from 'vitest';
import { buildLattice, readPasted, readSourceText, sourceLabel, type Source } from './index.ts';

const weights = (source: Source) => buildLattice(source).graph!.vertices.map((v) => Number(v.weight));

describe('reading what people paste', () => {
  const a2 = [
    [2, -1],
    [-1, 2],
  ];
  it.each([
    ['spaces', '2 -1\n-1 2'],
    ['commas', '2, -1\n-1, 2'],
    ['brackets', '[[2,-1],[-1,2]]'],
    ['braces', '{{2, -1}, {-1, 2}}'],
    ['semicolons', '[2 -1; -1 2]'],
    ['CSV', '"2","-1"\r\n"-1","2"\r\n'],
    ['LaTeX', '\\begin{pmatrix} 2 & -1 \\\\ -1 & 2 \\end{pmatrix}'],
    ['LaTeX array', '$\\left[\\begin{array}{cc} 2 & -1 \\\\ -1 & 2 \\end{array}\\right]$'],
    ['true minus', '2 −1\n−1 2'],
    ['one line', '2 -1 -1 2'],
    ['tabs', '2\t-1\n-1\t2\n'],
  ])('%s', (_name, text) => {
    expect(readPasted(text).rows).toEqual(a2);
  });

  it('names row and entry of what is no integer', () => {
    expect(() => readPasted('2 -1\n-1 1.5')).toThrow(/row 2, entry 2.*1\.5/);
  });

  it.each([
    ['17/5', '17/5'],
    ['P(3, 5, -7)', 'P(3, 5, −7)'],
    ['M(2/5, 3/7, -4/3)', 'M(2/5, 3/7, −4/3)'],
    ['[4, 2, 3]', 'tree, 3 vertices'],
    ['E6', 'tree, 6 vertices'],
    ['star -2: 3/2, 5/4, 7/1', 'star −2; 2/3, 4/5, 1/7'],
    ['2 -1; -1 2', 'matrix 2 × 2'],
  ])('reads %s', (text, label) => {
    expect(sourceLabel(readSourceText(text))).toBe(label);
  });

  it('reads a list of weights as a chain', () => {
    expect(weights(readSourceText('[4, 2, 3]'))).toEqual([-4, -2, -3]);
    expect(buildLattice(readSourceText('E7')).determinant).toBe(2n);
    expect(buildLattice(readSourceText('D6')).determinant).toBe(4n);
  });
});
