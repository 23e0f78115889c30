import { describe, expect, it } from 'vitest';
import { exclusionClause, exclusionReason, groundInShort } from './grounds.ts';
import { questionName, space, targetInWords } from './places.ts';
import { verdictHeading, verdictLead, type VerdictFacts } from './verdicts.ts';

const embeds: VerdictFacts = {
  verdict: 'embeds',
  ground: 'exhaustion',
  target: { dimension: 9 },
  scope: 'all',
  rank: 8,
  dimension: 9,
  orbits: '1',
  total: '185794560',
  complete: true,
};
const excluded: VerdictFacts = {
  ...embeds,
  verdict: 'excluded',
  ground: 'determinant',
  target: { dimension: 8 },
  dimension: 8,
  orbits: '0',
  total: '0',
};

describe('targets', () => {
  it('are named with a superscript', () => {
    expect(space(9)).toBe('Z^9');
    expect(space(14)).toBe('Z^{14}');
    expect(space(1_000_000)).toBe('Z^{1\u202f000\u202f000}');
    expect(targetInWords({ excess: 1 }, null)).toBe('Z^{rank + 1}');
    expect(targetInWords({ excess: 1 }, 8)).toBe('Z^9');
    expect(targetInWords({ least: {} }, 8)).toBe('the least Z^n');
    expect(targetInWords({ any: true }, 8)).toBe('any Z^n');
    expect(questionName('P(3, 5, −7)', { dimension: 9 }, 8)).toBe('P(3, 5, −7) in Z^9');
  });
});

describe('a verdict', () => {
  it('that is complete names lattice, target and count', () => {
    expect(verdictHeading(embeds)).toBe('Embeds in Z^9, in exactly one way up to symmetry');
    expect(verdictLead(embeds)).toBe('Complete list: 1 orbit, 185\u202f794\u202f560 embeddings in all.');
    expect(verdictHeading({ ...embeds, orbits: '12' })).toBe('Embeds in Z^9, in exactly 12 ways up to symmetry');
  });

  it('on one embedding never claims more than one (LOOK-DETAIL.md 6, number 2)', () => {
    const one = {
      ...embeds,
      ground: 'embedding',
      scope: 'one',
      complete: false,
      orbits: null,
      total: null,
      dimension: 12,
    } as const;
    expect(verdictHeading(one)).toBe('Embeds in Z^{12}');
    expect(verdictLead(one)).toBe('One embedding was found; others were not looked for.');
  });

  it('on the least n says why no smaller one is possible', () => {
    const least: VerdictFacts = {
      ...embeds,
      target: { least: {} },
      determinant: '41',
      exclusion: { ground: 'determinant', dimension: 8 },
    };
    expect(verdictHeading(least)).toBe('Embeds in Z^9, the least, in exactly one way up to symmetry');
    expect(verdictLead(least)).toContain('And 9 is least: 41 is not a square, so Z^8 is excluded.');
    expect(verdictLead({ ...least, exclusion: undefined })).toContain('And 9 is least: Z^8 is excluded.');
  });

  it('of exclusion gives its ground (number 4)', () => {
    expect(verdictHeading(excluded)).toBe('Excluded: it does not embed in Z^8');
    expect(verdictLead({ ...excluded, determinant: '41' })).toBe(
      'At n = rank the determinant has to be a square; 41 is not one.',
    );
    expect(verdictHeading({ ...excluded, dimension: null })).toBe('Excluded: it embeds in no Z^n');
  });

  it('that is open concludes nothing', () => {
    expect(verdictHeading({ ...embeds, verdict: 'open' })).toBe('Open');
    expect(verdictLead({ ...embeds, verdict: 'open' })).toBe('Nothing can be concluded.');
  });
});

describe('grounds', () => {
  const facts = { dimension: 4, rank: 3, determinant: '17', primes: ['2', '17'] };
  it('name their primes', () => {
    expect(exclusionReason({ ...facts, ground: 'hilbert' })).toBe(
      'Over the rationals the form is not represented by 4 squares: the Hilbert symbols fail at the primes 2 and 17.',
    );
    expect(exclusionClause({ ...facts, ground: 'hilbert' })).toBe(
      'Z^4 is excluded by Hilbert symbols at the primes 2 and 17',
    );
  });
  it('count the columns that could occur', () => {
    const column = { ...facts, ground: 'column', rank: 6 } as const;
    expect(exclusionReason({ ...column, columns: { vectors: '0', spanned: 0 } })).toBe(
      'Every column c of an embedding that is not zero has c^TQ^{−1}c ≤ 1, and no integer column does.',
    );
    expect(exclusionReason({ ...column, dimension: 6, columns: { vectors: '1', spanned: 1 } })).toBe(
      'Up to sign only 1 integer column could occur in an embedding (c^TQ^{−1}c = 1), and the dimension of their span is 1, where 6 is needed.',
    );
    expect(exclusionReason({ ...column, dimension: null, columns: { vectors: '12', spanned: 5 } })).toContain(
      '12 integer',
    );
  });
  it('name rank and dimension', () => {
    expect(exclusionReason({ ground: 'dimension', dimension: 7, rank: 8 })).toBe(
      '8 independent vectors do not fit into Z^7.',
    );
    expect(exclusionReason({ ground: 'dimension', dimension: 0, rank: 1 })).toBe('A vector does not fit into Z^0.');
    expect(exclusionReason({ ground: 'exhaustion', dimension: null, rank: 8 })).toContain('enough for any n');
    expect(groundInShort('hilbert')).toBe('Hilbert symbols');
  });
});
