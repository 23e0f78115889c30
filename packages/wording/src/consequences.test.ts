import { describe, expect, it } from 'vitest';
import { consequences, excludedAtRank, type ConsequenceFacts } from './consequences.ts';

/** P(3, 5, −7) in the least Z^n: rank 8, determinant 41 (MATHEMATICS.md, section 2), found in Z^9. */
const pretzel: ConsequenceFacts = {
  sourceKind: 'montesinos',
  verdict: 'embeds',
  complete: true,
  target: { least: {} },
  dimension: 9,
  rank: 8,
  nullity: 0,
  determinant: '41',
  orientation: 'entered',
};
const line = (facts: ConsequenceFacts, id: string) => consequences(facts).find((l) => l.id === id);

describe('what a verdict may mean', () => {
  it('obstructs a rational ball and sliceness when n = rank is excluded', () => {
    expect(line(pretzel, 'ball')).toMatchObject({ outcome: 'obstructed', theorem: 'Donaldson 1987; n = rank' });
    expect(line(pretzel, 'slice')).toMatchObject({ outcome: 'obstructed' });
  });

  it('names theorem, hypotheses and who confirms them in every line that obstructs', () => {
    for (const l of consequences(pretzel)) {
      expect(l.boxes.length).toBeGreaterThan(0);
      expect(l.sentence).toMatch(/Donaldson/);
      expect(l.sentence).toMatch(/provided that/);
      expect(l.sentence).toMatch(/You confirm/);
    }
  });

  it.each<[string, Partial<ConsequenceFacts>, boolean]>([
    ['excluded at n = rank', { verdict: 'excluded', target: { dimension: 8 }, dimension: 8 }, true],
    [
      'excluded at a larger n, which contains Z^rank',
      { verdict: 'excluded', target: { dimension: 9 }, dimension: 9 },
      true,
    ],
    ['excluded from every Z^n', { verdict: 'excluded', target: { any: true }, dimension: null }, true],
    ['excluded below the rank only', { verdict: 'excluded', target: { dimension: 7 }, dimension: 7 }, false],
    ['embeds at n = rank', { target: { dimension: 8 }, dimension: 8 }, false],
    ['embeds in Z^9, which was asked for as such', { target: { dimension: 9 } }, false],
    ['embeds somewhere', { target: { any: true }, dimension: null }, false],
    ['the least n is the rank', { dimension: 8 }, false],
  ])('%s', (_, change, obstructed) => {
    const facts = { ...pretzel, ...change };
    expect(excludedAtRank(facts)).toBe(obstructed);
    for (const l of consequences(facts)) {
      expect(l.outcome).toBe(obstructed ? 'obstructed' : 'open');
      if (!obstructed) expect(l.boxes).toEqual([]);
    }
  });

  it('is silent where the form has a radical', () => {
    const facts = { ...pretzel, nullity: 1 };
    expect(consequences(facts).every((l) => l.outcome === 'open')).toBe(true);
    // The link then has determinant 0, and a knot has not, whatever the determinant of the reduced lattice.
    expect(line(facts, 'slice')).toBeUndefined();
  });

  it('never speaks of a slice knot where the determinant is even, nor of any link where a matrix was entered', () => {
    expect(line({ ...pretzel, determinant: '40' }, 'slice')).toBeUndefined();
    expect(line({ ...pretzel, determinant: '40' }, 'chi-slice')).toMatchObject({ outcome: 'obstructed' });
    expect(consequences({ ...pretzel, sourceKind: 'matrix' }).map((l) => l.id)).toEqual(['ball']);
    expect(line({ ...pretzel, sourceKind: 'matrix' }, 'ball')!.boxes[1]!.label).toContain('definite 4-manifold');
  });

  it('says nothing at all about an open question', () => {
    expect(consequences({ ...pretzel, verdict: 'open', complete: false })).toEqual([]);
  });
});
