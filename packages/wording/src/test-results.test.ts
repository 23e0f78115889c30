import { describe, expect, it } from 'vitest';
import { testAnswerInWords, testFolded, testInWords } from './test-results.ts';

describe('answers of tests', () => {
  it.each([
    ['index', '3', '3'],
    ['complement', { gram: [['41']] }, '<41>'],
    [
      'complement',
      {
        gram: [
          ['2', '-1'],
          ['-1', '2'],
        ],
      },
      '[[2, −1], [−1, 2]]',
    ],
    ['complement', { gram: [] }, 'none: n is the rank'],
    ['cubiquity', { applies: false, reason: 'n is not the rank' }, 'does not apply: n is not the rank'],
    ['cubiquity', { cubiquitous: true, missed: null }, 'cubiquitous: every coset is hit'],
    ['cubiquity', { cubiquitous: false, missed: [0, -1] }, 'not cubiquitous: a coset is missed, for instance (0, −1)'],
    ['pair', { undecided: true, reason: 'the list is not complete' }, 'undecided: the list is not complete'],
    ['pair', { passes: true, witness: [0, 1] }, 'passes with embeddings 1 and 2'],
    ['pair', { passes: false }, 'fails'],
    [
      'doubleOrbits',
      { groupOrder: '51840', count: '3', representatives: [0, 2, 5], generators: [] },
      '3 double orbits; the lattice has 51\u202f840 automorphisms',
    ],
    [
      'doubleOrbits',
      { groupOrder: '12', count: '1', representatives: [0], generators: [] },
      '1 double orbit; the lattice has 12 automorphisms',
    ],
    ['later', { value: 3 }, '{"value":3}'],
  ])('%s %j is “%s”', (name, answer, words) => expect(testAnswerInWords(name, answer as never)).toBe(words));

  it('fold the generators of the automorphisms away', () => {
    const generator = [
      ['0', '-1'],
      ['1', '10'],
    ];
    const answer = { groupOrder: '12', count: '2', representatives: [0, 3], generators: [generator] };
    expect(testFolded('doubleOrbits', answer)).toEqual({
      title: '1 generator',
      note: 'One of each: embeddings 1 and 4. That they generate the whole group is worked out by the search and not repeated by the checker.',
      matrices: [' 0 −1\n 1 10'],
      left: 0,
    });
    const many = { ...answer, generators: new Array(30).fill(generator) };
    expect(testFolded('doubleOrbits', many)).toMatchObject({ title: '30 generators', left: 18 });
    expect(testFolded('doubleOrbits', { undecided: true, reason: 'the list is not complete' })).toBeNull();
    expect(testFolded('pair', { passes: false })).toBeNull();
  });

  it('have names, and an unknown one keeps its own', () => {
    expect(testInWords('halfChangemaker')).toBe('half-integer changemaker');
    expect(testInWords('later')).toBe('later');
  });
});
