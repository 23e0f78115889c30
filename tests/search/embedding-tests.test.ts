/** Tests on embeddings against the values of the conventions page (computed independently there). */
import { describe, expect, it } from 'vitest';
import { answerAlone } from '@palmette/threads';

interface Answered {
  readonly claim: { readonly orbits: string };
  readonly embeddings: readonly { readonly tests: Record<string, Record<string, unknown> & string> }[];
  readonly tests: Record<string, Record<string, unknown>>;
}

function answer(source: object, excess: number, tests: readonly string[]): Answered {
  const end = answerAlone(
    JSON.stringify({ format: 'palmette.question/1', source, target: { excess }, scope: 'all', tests }),
  );
  if (end.kind !== 'answer') throw new Error(end.message);
  return JSON.parse(
    Buffer.concat([...end.certificate])
      .toString()
      .split('\n')[0]!,
  ) as Answered;
}
const pretzel = (...a: number[]) => ({ kind: 'montesinos', pretzel: a });
const lens = (p: number, q: number, orientation = 'chain') => ({ kind: 'fraction', p, q, orientation });
const gcd = (a: number, b: number): number => (b === 0 ? a : gcd(b, a % b));

describe('pair test (Donald, Trans. AMS 367 (2015))', () => {
  it.each([
    [[3, -3, 3], true],
    [[5, -5, 5], true],
    [[3, -3, 5], false],
    [[3, -3, 7], false],
  ] as const)('P(%s): %s', (strands, passes) => {
    expect(answer(pretzel(...strands), 0, ['pair']).tests['pair']!['passes']).toBe(passes);
  });

  it('P(a, b, −b, −a) passes iff a = b or gcd(a, b) = 1', () => {
    for (let a = 2; a <= 5; a += 1)
      for (let b = a; b <= 6; b += 1)
        expect({ a, b, passes: answer(pretzel(a, b, -b, -a), 0, ['pair']).tests['pair']!['passes'] }).toEqual({
          a,
          b,
          passes: a === b || gcd(a, b) === 1,
        });
  });

  it('P(3,3,−3,−3) passes with the witness [0, 1] only; P(3,3,−15) fails', () => {
    expect(answer(pretzel(3, 3, -3, -3), 0, ['pair']).tests['pair']).toEqual({ passes: true, witness: [0, 1] });
    expect(answer(pretzel(3, 3, -15), 0, ['pair']).tests['pair']).toEqual({ passes: false });
  });

  // for one filling alone 5/1 + 5/1 passes: 5·I_2 has two orbits with different column spaces modulo 5
  it('L(p, q_1) # L(p, q_2) passes with both fillings iff p is odd and L(p, q_2) = −L(p, q_1), p ≤ 9', () => {
    const passes = (p: number, q1: number, q2: number, side: string) =>
      answer({ kind: 'sum', of: [lens(p, q1, side), lens(p, q2, side)] }, 0, ['pair']).tests['pair']!['passes'] ===
      true;
    for (let p = 2; p <= 9; p += 1) {
      for (let q1 = 1; q1 < p; q1 += 1) {
        for (let q2 = q1; q2 < p; q2 += 1) {
          if (gcd(p, q1) !== 1 || gcd(p, q2) !== 1) continue;
          const opposite = (q1 + q2) % p === 0 || (q1 * q2 + 1) % p === 0;
          const both = passes(p, q1, q2, 'chain') && passes(p, q1, q2, 'dual');
          expect({ p, q1, q2, both }).toEqual({ p, q1, q2, both: p % 2 === 1 && opposite });
        }
      }
    }
  });
});

describe('cubiquity (Greene–Owens 2022)', () => {
  it.each([3, 5, 7, 9])('P(3, %i, −a − 12) embeds at its rank and misses cosets', (a) => {
    const found = answer(pretzel(3, a, -a - 12), 0, ['cubiquity']);
    expect(found.embeddings.length).toBeGreaterThan(0);
    for (const { tests } of found.embeddings)
      expect(tests['cubiquity']).toMatchObject({ cubiquitous: false, missed: expect.any(Array) });
  });

  // Lisca, Geom. Topol. 11 (2007): these bound rational balls, and a linear chain is sharp
  it.each([
    [4, 1],
    [9, 2],
    [25, 9],
    [25, 4],
    [49, 20],
  ])('an orbit of %i/%i is cubiquitous', (p, q) => {
    const { embeddings } = answer(lens(p, q), 0, ['cubiquity']);
    expect(embeddings.some((e) => e.tests['cubiquity']!['cubiquitous'] === true)).toBe(true);
  });

  it('25/2 in Z^2 is not: the index 5 is above 2^2 (no rational ball, although it embeds)', () => {
    expect(answer(lens(25, 2), 0, ['cubiquity']).embeddings[0]!.tests['cubiquity']).toMatchObject({
      cubiquitous: false,
    });
  });
});

describe('changemaker complements (Greene, Ann. of Math. 177 (2013))', () => {
  it.each([
    [18, 5, ['1', '2', '2', '3'], '5'],
    [19, 3, ['1', '1', '1', '4'], '6'],
    [19, 8, ['1', '1', '2', '2', '3'], '5'],
  ] as const)('%i/%i: one orbit qualifies', (p, q, sigma, genus) => {
    const qualified = answer(lens(p, q), 1, ['changemaker'])
      .embeddings.map((e) => e.tests['changemaker']!)
      .filter((t) => t['changemaker'] === true);
    expect(qualified).toEqual([{ sigma, changemaker: true, genus }]);
  });

  it('18/13 in Z^5: the complement is ⟨2⟩', () => {
    const { tests } = answer(lens(18, 13), 1, ['complement', 'changemaker']).embeddings[0]!;
    expect(tests['complement']).toEqual({ gram: [['2']] });
    expect(tests['changemaker']).toMatchObject({ changemaker: false });
    expect(tests['index']).toBe('3');
  });
});

describe('what does not apply says why', () => {
  it('names the reason, and nothing is dropped', () => {
    const { tests, embeddings } = answer(pretzel(3, 5, -7), 1, [
      'complement',
      'metaboliser',
      'pair',
      'cubiquity',
      'changemaker',
      'halfChangemaker',
      'dInvariants',
      'doubleOrbits',
    ]);
    expect(embeddings[0]!.tests['complement']).toEqual({ gram: [['41']] });
    expect(embeddings[0]!.tests['cubiquity']).toEqual({ applies: false, reason: 'n is not the rank' });
    expect(tests['pair']).toEqual({ applies: false, reason: 'n is not the rank' });
    expect(Object.keys(tests).sort()).toEqual(['dInvariants', 'doubleOrbits', 'halfChangemaker', 'pair']);
  });
});
