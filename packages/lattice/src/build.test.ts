/** Worked examples of the conventions, and refusals with their places. */
import { describe, expect, it } from 'vitest';
import {
  buildLattice,
  definiteness,
  discriminantGroup,
  hirzebruchJung,
  readSourceText,
  reducedBasis,
  SourceFault,
  type Source,
} from './index.ts';
import { isIdentity, multiply, transpose } from '@palmette/exact';

const pretzel = (...a: number[]): Source => ({ kind: 'montesinos', pretzel: a, orientation: 'definite' });
const weights = (source: Source) => buildLattice(source).graph!.vertices.map((v) => Number(v.weight));
const small = (source: Source) => buildLattice(source).gram.map((row) => row.map(Number));

function fault(source: Source): { path: string; message: string } {
  try {
    buildLattice(source);
  } catch (error) {
    if (error instanceof SourceFault) return { path: error.path, message: error.message };
    throw error;
  }
  throw new Error('not refused');
}

describe('continued fractions', () => {
  // p/q = a_1 − 1/(a_2 − …): common practice
  it.each([
    [17n, 5n, [4, 2, 3]],
    [17n, 12n, [2, 2, 4, 2]],
    [19n, 7n, [3, 4, 2]],
    [169n, 14n, [13, ...new Array<number>(13).fill(2)]],
  ])('%s/%s', (p, q, entries) => {
    expect(hirzebruchJung(p, q).map(Number)).toEqual(entries);
  });

  it('is dual to p/(p − q) by Riemenschneider: Σ(a − 1) = Σ(b − 1) = k + l − 1; reversing inverts q', () => {
    for (let p = 2n; p <= 60n; p += 1n) {
      for (let q = 1n; q < p; q += 1n) {
        let g = p;
        for (let r = q; r !== 0n;) [g, r] = [r, g % r];
        if (g !== 1n) continue;
        const a = hirzebruchJung(p, q);
        const b = hirzebruchJung(p, p - q);
        const sum = (list: bigint[]) => list.reduce((s, x) => s + Number(x) - 1, 0);
        expect([sum(a), sum(b)]).toEqual([a.length + b.length - 1, a.length + b.length - 1]);
        const inverse = Array.from({ length: Number(p) }, (_, x) => BigInt(x)).find((x) => (x * q) % p === 1n)!;
        expect(hirzebruchJung(p, inverse)).toEqual(a.toReversed());
      }
    }
  });
});

describe('stars', () => {
  it.each([
    ['P(3,5,−7)', pretzel(3, 5, -7), [-2, -2, -2, -2, -2, -2, -2, -7], 41n, 8],
    ['P(−2,3,7)', pretzel(-2, 3, 7), [-1, -2, -3, -7], 1n, 4],
    ['P(3,3,−2)', pretzel(3, 3, -2), [-2, -2, -2, -2, -2, -2], 3n, 6],
    [
      'M(2/5,3/7,−4/3)',
      {
        kind: 'montesinos',
        slopes: [
          [2, 5],
          [3, 7],
          [-4, 3],
        ],
        orientation: 'definite',
      } as Source,
      [-2, -3, -2, -3, -2, -2, -2, -2],
      53n,
      8,
    ],
    [
      'Σ(2,3,11)',
      {
        kind: 'seifert',
        centre: -2,
        fibres: [
          [1, 2],
          [2, 3],
          [9, 11],
        ],
        orientation: 'definite',
      } as Source,
      [-2, -2, -2, -2, -2, -2, -2, -2, -3],
      1n,
      9,
    ],
    ['P(3,3,−15), reversed', pretzel(3, 3, -15), [-2, -2, -2, -2, -2, -15], 81n, 6],
  ])('%s', (_name, source, expected, det, rank) => {
    const lattice = buildLattice(source);
    const sorted = (list: number[]) => [...list].sort((a, b) => a - b);
    expect(sorted(weights(source))).toEqual(sorted(expected as number[]));
    expect(lattice).toMatchObject({ determinant: det, rank, nullity: 0, sign: -1 });
  });

  it('P(3,5,−7) has centre −2 and legs [7], [2,2], [2,2,2,2] in the order given', () => {
    expect(weights(pretzel(3, 5, -7))).toEqual([-2, -2, -2, -2, -2, -2, -2, -7]);
    expect(buildLattice(pretzel(3, 5, -7)).graph!.edges.map(([i, j]) => [i, j])).toEqual([
      [0, 1],
      [1, 2],
      [0, 3],
      [3, 4],
      [4, 5],
      [5, 6],
      [0, 7],
    ]);
  });

  it('records the orientation, and e = 0 gives nullity 1', () => {
    expect(buildLattice(pretzel(3, 3, -15)).orientation).toBe('reversed');
    const four = buildLattice(pretzel(2, 2, -2, -2));
    expect(four).toMatchObject({ rank: 4, nullity: 1, sign: -1 });
    expect(definiteness(four)).toBe('negative semidefinite, nullity 1');
    const { basis, gram } = reducedBasis(four);
    expect(isIdentity(multiply(basis!.matrix, basis!.inverse))).toBe(true);
    const product = multiply(transpose(basis!.matrix), multiply(four.gram, basis!.matrix));
    expect(product.map((row) => row.slice(0, 4)).slice(0, 4)).toEqual(gram);
    expect([...product.map((row) => row[4]!), ...product[4]!].every((x) => x === 0n)).toBe(true);
    expect(
      multiply(four.radical, four.gram)
        .flat()
        .every((x) => x === 0n),
    ).toBe(true);
  });

  it('the determinant of a pretzel is |∏ a · Σ 1/a|', () => {
    for (const [a, b, c] of [
      [3, 5, 7],
      [3, -5, 9],
      [-2, 5, 7],
      [4, 5, -3],
      [1, 4, -6],
    ] as const) {
      const numerator = Math.abs(b * c + a * c + a * b);
      if (numerator !== 0) expect(buildLattice(pretzel(a, b, c)).determinant).toBe(BigInt(numerator));
    }
  });
});

describe('diagrams', () => {
  const trefoil = [
    [1, 4, 2, 5],
    [3, 6, 4, 1],
    [5, 2, 6, 3],
  ] as const;
  const eight = [
    [4, 2, 5, 1],
    [8, 6, 1, 5],
    [6, 3, 7, 4],
    [2, 7, 3, 8],
  ] as const;
  const form = (pd: DiagramPd, colouring: 0 | 1) => {
    const { gram, sign } = buildLattice({ kind: 'diagram', pd, colouring });
    return gram.map((row) => row.map((x) => Number(x) * sign));
  };
  type DiagramPd = readonly (readonly [number, number, number, number])[];

  // Goeritz 1933; Gordon–Litherland, Invent. Math. 47 (1978)
  it('left-handed trefoil: [[2,−1],[−1,2]] and [[−3]]', () => {
    const both = [form(trefoil, 0), form(trefoil, 1)].sort((a, b) => b.length - a.length);
    expect(both).toEqual([
      [
        [2, -1],
        [-1, 2],
      ],
      [[-3]],
    ]);
  });

  it('figure-eight: colouring 0 is [[2,−1],[−1,3]], colouring 1 is negative with determinant 5', () => {
    expect(form(eight, 0)).toEqual([
      [2, -1],
      [-1, 3],
    ]);
    expect(buildLattice({ kind: 'diagram', pd: eight, colouring: 1 })).toMatchObject({
      sign: -1,
      determinant: 5n,
      rank: 2,
    });
  });

  it('Hopf link: [[2]] and [[−2]]', () => {
    expect(
      [
        form(
          [
            [4, 1, 3, 2],
            [2, 3, 1, 4],
          ],
          0,
        ),
        form(
          [
            [4, 1, 3, 2],
            [2, 3, 1, 4],
          ],
          1,
        ),
      ].sort(),
    ).toEqual([[[-2]], [[2]]]);
  });

  it('counts crossings + 2 regions and refuses what is not planar', () => {
    expect(
      fault({
        kind: 'diagram',
        pd: [
          [1, 2, 3, 4],
          [1, 2, 3, 4],
        ],
        colouring: 0,
      }).path,
    ).toMatch(/^\/pd/);
    expect(fault({ kind: 'diagram', pd: [[1, 2, 3, 4]], colouring: 0 }).message).toContain('twice');
  });
});

describe('graphs, sums, matrices', () => {
  it('cuts of a triangle are A_2, flows are ⟨3⟩', () => {
    expect(
      small({
        kind: 'graph',
        edges: [
          [0, 1],
          [1, 2],
          [2, 0],
        ],
        lattice: 'cuts',
      }),
    ).toEqual([
      [2, -1],
      [-1, 2],
    ]);
    expect(
      small({
        kind: 'graph',
        edges: [
          [0, 1],
          [1, 2],
          [2, 0],
        ],
        lattice: 'flows',
      }),
    ).toEqual([[3]]);
  });

  it('sums stack rows and keep one sign', () => {
    expect(
      buildLattice({
        kind: 'sum',
        of: [
          { kind: 'fraction', p: 3, q: 1, orientation: 'chain' },
          { kind: 'fraction', p: 5, q: 2, orientation: 'chain' },
        ],
      }),
    ).toMatchObject({ rank: 3, determinant: 15n, sign: -1 });
    expect(
      fault({
        kind: 'sum',
        of: [
          { kind: 'matrix', rows: [[1]] },
          { kind: 'matrix', rows: [[-1]] },
        ],
      }).path,
    ).toBe('/of/1');
  });

  it('discriminant groups: A_4 is Z/5, D_4 is Z/2 + Z/2, E8 is trivial (common practice)', () => {
    expect(discriminantGroup(buildLattice(readSourceText('A4')))).toEqual([5n]);
    expect(discriminantGroup(buildLattice(readSourceText('D4')))).toEqual([2n, 2n]);
    expect(discriminantGroup(buildLattice(readSourceText('E8')))).toEqual([]);
  });

  it('builds a chain of 2,500 vertices', () => {
    expect(buildLattice({ kind: 'fraction', p: 2501, q: 2500, orientation: 'chain' })).toMatchObject({
      rank: 2500,
      determinant: 2501n,
    });
    expect(fault({ kind: 'fraction', p: 2502, q: 2501, orientation: 'chain' }).message).toContain('2500');
  });
});

describe('refusals name place, expectation and finding', () => {
  const vertex = (name: string, weight = -2) => ({ name, weight });
  it.each<[string, Source, string, string]>([
    [
      'not symmetric',
      {
        kind: 'matrix',
        rows: [
          [2, 1],
          [0, 2],
        ],
      },
      '/rows/1/0',
      'symmetric',
    ],
    [
      'indefinite',
      {
        kind: 'matrix',
        rows: [
          [1, 0],
          [0, -1],
        ],
      },
      '',
      'signature (1, 1)',
    ],
    [
      'hyperbolic',
      {
        kind: 'matrix',
        rows: [
          [0, 1],
          [1, 0],
        ],
      },
      '',
      'signature (1, 1)',
    ],
    ['not coprime', { kind: 'fraction', p: 6, q: 4, orientation: 'chain' }, '/q', '2'],
    ['q too big', { kind: 'fraction', p: 6, q: 7, orientation: 'chain' }, '/q', 'found q = 7'],
    ['zero slope', { kind: 'montesinos', slopes: [[0, 3]], orientation: 'definite' }, '/slopes/0/0', 'found 0'],
    ['zero strand', pretzel(3, 0), '/pretzel/1', 'found 0'],
    ['unknown vertex', { kind: 'tree', vertices: [vertex('a')], edges: [['a', 'b']] }, '/edges/0/1', '"b"'],
    [
      'doubled edge',
      {
        kind: 'tree',
        vertices: [vertex('a'), vertex('b')],
        edges: [
          ['a', 'b'],
          ['b', 'a'],
        ],
      },
      '/edges/1',
      'again',
    ],
    ['self loop', { kind: 'tree', vertices: [vertex('a')], edges: [['a', 'a']] }, '/edges/0', 'loop'],
    ['doubled name', { kind: 'tree', vertices: [vertex('a'), vertex('a')], edges: [] }, '/vertices/1/name', '"a"'],
  ])('%s', (_name, source, path, text) => {
    const found = fault(source);
    expect(found.path).toBe(path);
    expect(found.message).toContain(text);
  });
});
