/** The checker on certificates as the product writes them: true ones are verified, every false variant is not. */
import { describe, expect, it } from 'vitest';
import { check, concludeCheck, openCheck, openCheckRun, splitCheck } from '@palmette/checker';
import { answerAlone } from '@palmette/threads';
import { tamper, unknownVersions } from './tamper.ts';

function certificateOf(source: unknown, target: unknown, more: object = {}): Uint8Array {
  const end = answerAlone(JSON.stringify({ format: 'palmette.question/1', source, target, scope: 'all', ...more }));
  if (end.kind !== 'answer') throw new Error(end.message);
  return Buffer.concat([...end.certificate]);
}

const pretzel = (...a: number[]) => ({ kind: 'montesinos', pretzel: a });
const fraction = (p: number, q: number, orientation = 'chain') => ({ kind: 'fraction', p, q, orientation });
const e8 = {
  kind: 'tree',
  vertices: [...'abcdefgh'].map((name) => ({ name, weight: -2 })),
  edges: [
    ['a', 'b'],
    ['b', 'c'],
    ['c', 'd'],
    ['d', 'e'],
    ['e', 'f'],
    ['f', 'g'],
    ['c', 'h'],
  ],
};

const CASES: readonly (readonly [string, Uint8Array, RegExp])[] = [
  [
    'A_2 in Z^3',
    certificateOf(
      {
        kind: 'matrix',
        rows: [
          [2, -1],
          [-1, 2],
        ],
      },
      { dimension: 3 },
    ),
    /rank 2, determinant 3, in dimension 3: 1 orbit, 48 in all, complete/,
  ],
  ['17/5 in Z^4', certificateOf(fraction(17, 5), { dimension: 4 }), /does not embed in dimension 4, by hilbert/],
  [
    '17/5, least',
    certificateOf(fraction(17, 5), { least: {} }),
    /in dimension 5 \(the least\): 1 orbit, 3840 in all, complete/,
  ],
  ['P(3,5,−7) in Z^8', certificateOf(pretzel(3, 5, -7), { excess: 0 }), /by determinant/],
  ['P(3,5,−7) in Z^9', certificateOf(pretzel(3, 5, -7), { excess: 1 }), /1 orbit, 185794560 in all/],
  [
    'P(3,5,−7) in Z^10, one',
    certificateOf(pretzel(3, 5, -7), { excess: 2 }, { scope: 'one' }),
    /one embedding, others were not looked for/,
  ],
  [
    'P(2,2,−2,−2), semidefinite',
    certificateOf(pretzel(2, 2, -2, -2), { excess: 0 }),
    /nullity 1.*3 orbits, 1152 in all/,
  ],
  ['E8 in any', certificateOf(e8, { any: true }), /does not embed in any dimension, by column/],
  ['E8, least', certificateOf(e8, { least: {} }), /does not embed in any dimension/],
  ['E8, least up to 9', certificateOf(e8, { least: { upTo: 9 } }), /does not embed in any dimension/],
  ['E8 in Z^10', certificateOf(e8, { dimension: 10 }), /does not embed in dimension 10, by column/],
  [
    'A_3 in any',
    certificateOf(
      {
        kind: 'tree',
        vertices: [...'abc'].map((name) => ({ name, weight: -2 })),
        edges: [
          ['a', 'b'],
          ['b', 'c'],
        ],
      },
      { any: true },
    ),
    /2 orbits, complete/,
  ],
  [
    '18/5 in Z^4 by frames',
    certificateOf(fraction(18, 5), { dimension: 4 }, { method: 'frames' }),
    /2 orbits, 576 in all/,
  ],
  [
    '18/5 in Z^5 by frames',
    certificateOf(fraction(18, 5), { dimension: 5 }, { method: 'frames' }),
    /in dimension 5: \d+ orbits/,
  ],
  [
    '18/5 in Z^6 by columns',
    certificateOf(fraction(18, 5), { dimension: 6 }, { method: 'columns' }),
    /in dimension 6: \d+ orbits/,
  ],
  ['18/5 in any by columns', certificateOf(fraction(18, 5), { any: true }, { method: 'columns' }), /orbits, complete/],
  [
    '49/20 in Z^7, two methods',
    certificateOf(fraction(49, 20), { dimension: 7 }, { secondOpinion: true }),
    /complete; two methods agree: /,
  ],
  [
    '[7, 7, 7] in Z^4, no embedding, two methods',
    certificateOf(
      {
        kind: 'matrix',
        rows: [
          [7, 1, 1],
          [1, 7, 1],
          [1, 1, 7],
        ],
      },
      { dimension: 4 },
      { secondOpinion: true },
    ),
    /two methods agree|by /,
  ],
  [
    'a form of determinant 556,883,602,273,734 in Z^13, by gluing',
    certificateOf(
      {
        kind: 'matrix',
        rows: [
          [102, 28, -47, 14, 47, -15, -81, 65, -42, -11, 89, -1],
          [28, 1442, 92, -588, -145, 25, 1820, -1310, 317, 188, -770, 835],
          [-47, 92, 108, -90, -28, -29, 223, -156, 61, 11, -162, 85],
          [14, -588, -90, 283, 74, -1, -808, 575, -157, -81, 364, -366],
          [47, -145, -28, 74, 52, -17, -250, 182, -58, -29, 132, -99],
          [-15, 25, -29, -1, -17, 88, 93, -147, -56, -24, -95, 109],
          [-81, 1820, 223, -808, -250, 93, 2646, -2047, 425, 239, -1337, 1276],
          [65, -1310, -156, 575, 182, -147, -2047, 1722, -233, -142, 1151, -1093],
          [-42, 317, 61, -157, -58, -56, 425, -233, 170, 82, -148, 109],
          [-11, 188, 11, -81, -29, -24, 239, -142, 82, 71, -76, 73],
          [89, -770, -162, 364, 132, -95, -1337, 1151, -148, -76, 838, -714],
          [-1, 835, 85, -366, -99, 109, 1276, -1093, 109, 73, -714, 724],
        ],
      },
      { excess: 1 },
    ),
    /does not embed in dimension 13, by exhaustion/,
  ],
  ['25/2', certificateOf(fraction(25, 2), { dimension: 2 }), /1 orbit, 8 in all/],
  ['18/5 in Z^4', certificateOf(fraction(18, 5), { dimension: 4 }), /2 orbits, 576 in all/],
  [
    'a sum',
    certificateOf({ kind: 'sum', of: [fraction(3, 1), fraction(5, 2)] }, { excess: 2 }),
    /rank 3, determinant 15/,
  ],
  ['below the rank', certificateOf(fraction(17, 5), { dimension: 2 }), /by dimension/],
  [
    'a scrambled form, after LLL',
    certificateOf(
      {
        kind: 'matrix',
        rows: [
          [2, 9, 31],
          [9, 42, 143],
          [31, 143, 491],
        ],
      },
      { excess: 2 },
    ),
    /rank 3/,
  ],
  [
    'figure-eight diagram',
    certificateOf(
      {
        kind: 'diagram',
        pd: [
          [4, 2, 5, 1],
          [8, 6, 1, 5],
          [6, 3, 7, 4],
          [2, 7, 3, 8],
        ],
        colouring: 0,
      },
      { least: {} },
    ),
    /in dimension 4 \(the least\): 1 orbit, 192 in all/,
  ],
  [
    'flows of a graph',
    certificateOf(
      {
        kind: 'graph',
        edges: [
          [0, 1],
          [1, 2],
          [2, 0],
          [0, 3],
          [3, 2],
        ],
        lattice: 'flows',
      },
      { excess: 1 },
    ),
    /rank 2/,
  ],
];

describe.each(CASES)('%s', (_name, bytes, words) => {
  it('is verified, and the last line states the claim', () => {
    const outcome = check(bytes);
    expect(outcome.line).toMatch(/^VERIFIED /);
    expect(outcome.line).toMatch(words);
  });

  it('no false variant is verified', () => {
    for (const { name, bytes: changed } of tamper(bytes)) {
      const outcome = check(changed);
      expect({ name, verdict: outcome.verdict, line: outcome.line }).toMatchObject({ name, verdict: 'REJECTED' });
    }
  });

  it('unknown versions are not judged', () => {
    for (const { name, bytes: changed } of unknownVersions(bytes))
      expect({ name, ...check(changed) }).toMatchObject({ name, verdict: 'NOT CHECKED' });
  });
});

describe('chunks', () => {
  const large = certificateOf(
    { kind: 'sum', of: [17, 18, 20].map((m) => ({ kind: 'matrix', rows: [[m]] })) },
    { dimension: 8 },
  );
  const text = new TextDecoder().decode(large);

  it('a list of more than 10,000 orbits is verified', () => {
    expect(text.split('\n').length).toBeGreaterThan(10_000);
    expect(check(large).line).toMatch(/^VERIFIED .*complete$/);
  });

  it('a changed, dropped or swapped line is rejected', () => {
    const lines = text.split('\n');
    const without = [...lines.slice(0, 5), ...lines.slice(6)].join('\n');
    const swapped = [...lines.slice(0, 5), lines[6]!, lines[5]!, ...lines.slice(7)].join('\n');
    const changed = text.replace('"orbitSize":"', '"orbitSize":"1');
    for (const bad of [without, swapped, changed, text.slice(0, -200), `${text}x`])
      expect(check(new TextEncoder().encode(bad)).verdict).toBe('REJECTED');
  });
});

describe('in parcels', () => {
  const bytes = certificateOf({ kind: 'sum', of: [fraction(24, 5), fraction(24, 5)] }, { excess: 2 });

  it('cut and interrupted anywhere, the counts are those of the whole', () => {
    const opened = openCheck(bytes);
    if (!('work' in opened)) throw new Error(opened.outcome.line);
    for (const pieces of [1, 3, 8, 40]) {
      const counts = opened.work.trees.map((tree) => {
        let [nodes, orbits] = [0n, 0n];
        for (const interval of splitCheck(tree, pieces)) {
          let run = openCheckRun(tree, interval);
          for (let end = run.advance(5); end === 'more'; end = run.advance(1 + pieces))
            run = openCheckRun(tree, interval, run.checkpoint());
          nodes += run.nodes;
          orbits += run.orbits;
        }
        return { nodes: nodes.toString(), orbits: orbits.toString() };
      });
      expect({ pieces, line: concludeCheck(opened.work, counts).line }).toEqual({ pieces, line: check(bytes).line });
    }
  });

  it('a count that is short by one is rejected', () => {
    const opened = openCheck(bytes);
    if (!('work' in opened)) throw new Error(opened.outcome.line);
    const counts = opened.work.trees.map((tree) => ({
      nodes: (tree.nodes - 1n).toString(),
      orbits: tree.orbits.toString(),
    }));
    expect(concludeCheck(opened.work, counts).verdict).toBe('REJECTED');
  });
});
