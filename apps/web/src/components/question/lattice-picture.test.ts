import { describe, expect, it } from 'vitest';
import type { Question } from '@palmette/contracts';
import type { FileHead } from '../../api/certificate-file.ts';
import { latticePicture } from './lattice-picture.ts';

const head = (gram: readonly string[][], sign: 1 | -1) =>
  ({ lattice: { gram, sign, radical: [] } }) as unknown as FileHead;

describe('the picture of a lattice', () => {
  it('has the weights and the signs of the edges as they were entered', () => {
    const tree: Question['source'] = {
      kind: 'tree',
      vertices: [
        { name: 'a', weight: -4 },
        { name: 'b', weight: -2 },
        { name: 'c', weight: -3 },
      ],
      edges: [
        ['a', 'b'],
        ['b', 'c', -1],
      ],
    };
    const gram = [
      ['4', '-1', '0'],
      ['-1', '2', '1'],
      ['0', '1', '3'],
    ];
    expect(latticePicture(head(gram, -1), tree)).toEqual({
      names: ['a', 'b', 'c'],
      weights: ['-4', '-2', '-3'],
      edges: [
        [0, 1, 1],
        [1, 2, -1],
      ],
      radical: [],
    });
  });

  it('of a matrix numbers its rows and keeps its signs', () => {
    const matrix: Question['source'] = { kind: 'matrix', rows: [] };
    const gram = [
      ['2', '-1'],
      ['-1', '2'],
    ];
    expect(latticePicture(head(gram, 1), matrix)).toMatchObject({
      names: ['1', '2'],
      weights: ['2', '2'],
      edges: [[0, 1, -1]],
    });
  });
});
