import { describe, expect, it } from 'vitest';
import { arrangedMatrix } from './arranged-matrix.ts';
import { fruitSize } from './fruit.ts';
import { layTrellis, linesOf, type Trellis, type TrellisInput } from './trellis.ts';
import { SIZES, sizeFor } from './sizes.ts';
import type { Mark, TextMark } from './marks.ts';
import { textWidth } from './numerals.ts';

/** P(3, 5, −7) in Z^9: the only embedding, as drawn on the sheet. Rows: centre, then legs [2,2], [2,2,2,2], [7]. */
export const PRETZEL: TrellisInput = {
  matrix: [
    [0, 0, 0, 0, -1, 1, 0, 0, 0],
    [0, 0, 0, 0, 0, -1, -1, 0, 0],
    [0, 0, 0, 0, 0, 0, 1, -1, 0],
    [0, 0, 0, -1, 1, 0, 0, 0, 0],
    [0, 0, -1, 1, 0, 0, 0, 0, 0],
    [-1, 0, 1, 0, 0, 0, 0, 0, 0],
    [1, 1, 0, 0, 0, 0, 0, 0, 0],
    [0, 0, 0, 0, 0, -1, 1, 1, 2],
  ],
  names: ['c', '1.1', '1.2', '2.1', '2.2', '2.3', '2.4', '3.1'],
  weights: [-2, -2, -2, -2, -2, -2, -2, -7],
  edges: [
    [0, 1, 1],
    [1, 2, 1],
    [0, 3, 1],
    [3, 4, 1],
    [4, 5, 1],
    [5, 6, 1],
    [0, 7, 1],
  ],
};

/** [6, 2] in Z^10 with three zero columns left out. */
const BUNDLED: TrellisInput = {
  matrix: [
    [1, 1, 1, 1, 1, 1, 0],
    [-1, 0, 0, 0, 0, 0, 1],
  ],
  zeroColumns: 3,
  names: ['v1', 'v2'],
  weights: [-6, -2],
  edges: [[0, 1, 1]],
};

const chain = (length: number): TrellisInput => ({
  matrix: Array.from({ length }, (_, i) =>
    Array.from({ length: length + 1 }, (_, j) => (j === i ? 1 : j === i + 1 ? -1 : 0)),
  ),
  names: Array.from({ length }, (_, i) => `v${i + 1}`),
  weights: new Array<number>(length).fill(-2),
  edges: Array.from({ length: length - 1 }, (_, i) => [i, i + 1, 1]),
});

const texts = (trellis: Trellis): string[] =>
  trellis.marks.filter((m): m is TextMark => m.kind === 'text').map((m) => m.runs.map((r) => r.text).join(''));

/** Boxes of what must not touch: texts, fruits, dots. */
function boxes(marks: readonly Mark[]): { x1: number; y1: number; x2: number; y2: number; of: string }[] {
  return marks.flatMap((m) => {
    if (m.kind === 'round')
      return [
        { x1: m.x - m.halfWidth, x2: m.x + m.halfWidth, y1: m.y - m.radius, y2: m.y + m.radius, of: m.part.role },
      ];
    if (m.kind !== 'text' || m.part.role === 'fruit') return [];
    const w = textWidth(m.runs, m.size);
    const x1 = m.anchor === 'start' ? m.x : m.anchor === 'end' ? m.x - w : m.x - w / 2;
    return [
      { x1, x2: x1 + w, y1: m.y - 0.7 * m.size, y2: m.y, of: `${m.part.role} ${m.runs.map((r) => r.text).join('')}` },
    ];
  });
}

function overlaps(trellis: Trellis): string[] {
  const all = boxes(trellis.marks);
  const found: string[] = [];
  all.forEach((a, i) =>
    all.slice(i + 1).forEach((b) => {
      const touch =
        Math.min(a.x2, b.x2) - Math.max(a.x1, b.x1) > 0.01 && Math.min(a.y2, b.y2) - Math.max(a.y1, b.y1) > 0.01;
      if (touch) found.push(`${a.of} / ${b.of}`);
    }),
  );
  return found;
}

describe('the trellis of P(3, 5, −7) in Z^9', () => {
  const trellis = layTrellis(PRETZEL);

  it('has the longest leg reversed, the centre, then the other legs by length', () => {
    expect(trellis.vertices.map((v) => v.name)).toEqual(['2.4', '2.3', '2.2', '2.1', 'c', '3.1', '1.1', '1.2']);
  });

  it('falls as the staircase of the sheet', () => {
    const entries = trellis.wires.map((w) =>
      w.entries.map((e) => `${e.place + 1}${e.value < 0n ? '-' : '+'}${e.value ** 2n === 1n ? '' : e.value}`),
    );
    expect(entries).toEqual([
      ['1+', '2-'],
      ['1+'],
      ['2+', '3-'],
      ['3+', '4-'],
      ['4+', '5-'],
      ['5+', '6-', '7-'],
      ['6+', '7-', '8+'],
      ['6+', '8-'],
      ['6+2'],
    ]);
  });

  it('stands at the measures of the sheet', () => {
    const x = trellis.vertices.map((v) => Math.round(v.x - trellis.vertices[0]!.x));
    expect(x).toEqual([0, 56, 112, 168, 224, 280, 336, 392]);
    expect(trellis.wires[0]!.y - trellis.barY).toBeCloseTo(49.81, 2);
    expect(trellis.wires[1]!.y - trellis.wires[0]!.y).toBeCloseTo(38, 6);
    const arch = trellis.edges.find((e) => e.to - e.from === 2)!;
    expect(trellis.barY - arch.top).toBeCloseTo(28.1, 1);
    expect(arch.steps[1]).toEqual([
      'C',
      ...[0, -0.8 * 28.1066, 9.24, -28.1066, 30.8, -28.1066].map((d, i) =>
        expect.closeTo((i % 2 === 0 ? trellis.vertices[4]!.x : trellis.barY) + d, 1),
      ),
    ]);
  });

  it('hangs each stem down to the lowest entry of its vertex', () => {
    expect(trellis.vertices.map((v) => v.lowest + 1)).toEqual([2, 3, 4, 5, 6, 9, 7, 8]);
  });

  it('draws the leaf of the sheet', () => {
    const leaf = trellis.marks.find((m) => m.kind === 'path' && m.part.role === 'leaf')!;
    const { x } = trellis.vertices[0]!;
    const { y } = trellis.wires[0]!;
    const steps = leaf.kind === 'path' ? leaf.steps : [];
    // M104.00,186.92 C111.10,189.28 119.90,184.85 122.12,172.76 on the sheet
    expect(steps[1]).toEqual([
      'C',
      ...[7.1, 2.36, 15.9, -2.07, 18.12, -14.16].map((d, i) => expect.closeTo((i % 2 === 0 ? x : y) + d, 1)),
    ]);
  });

  it('touches nothing', () => {
    for (const size of ['roomy', 'narrow', 'close', 'fine'] as const)
      expect(overlaps(layTrellis(PRETZEL, { size, products: true }))).toEqual([]);
  });

  it('is the same whatever the order of the edges and the signs of the columns', () => {
    const turned = layTrellis({
      ...PRETZEL,
      matrix: PRETZEL.matrix.map((row) => [...row].reverse().map((x) => -Number(x))),
      edges: [...PRETZEL.edges].reverse(),
    });
    expect(turned.wires.map((w) => [w.entries, w.y])).toEqual(trellis.wires.map((w) => [w.entries, w.y]));
    expect(turned.vertices).toEqual(trellis.vertices);
    expect(JSON.stringify(layTrellis(PRETZEL).marks)).toBe(JSON.stringify(trellis.marks));
  });

  it('keeps order and signs of the certificate on wish', () => {
    const kept = layTrellis(PRETZEL, { arrange: 'certificate' });
    expect(kept.wires.map((w) => w.columns)).toEqual([[0], [1], [2], [3], [4], [5], [6], [7], [8]]);
    // the first column is −1 at 2.3, which stands second, and 1 at 2.4
    expect(kept.wires[0]!.entries).toEqual([
      { place: 0, value: 1n },
      { place: 1, value: -1n },
    ]);
    expect(kept.wires[4]!.entries[0]!.value).toBe(1n);
    expect(kept.wires[5]!.entries.map((e) => e.value)).toEqual([1n, -1n, -1n]);
  });
});

describe('the matrix beside it', () => {
  it('has the rows and columns of the drawing', () => {
    const { rows, rowNames, columnNames } = arrangedMatrix(layTrellis(PRETZEL));
    expect(rowNames[4]).toBe('c');
    expect(rows[5]!.map(Number)).toEqual([0, 0, 0, 0, 0, -1, 1, 1, 2]);
    expect(columnNames).toHaveLength(9);
    const bundled = arrangedMatrix(layTrellis(BUNDLED));
    expect(bundled.rows.map((row) => row.map(Number))).toEqual(BUNDLED.matrix);
    expect(bundled.columnNames).toEqual(['e_{1}', 'e_{2}', 'e_{3}', 'e_{4}', 'e_{5}', 'e_{6}', 'e_{7}']);
  });

  it('can keep numbers that its columns have elsewhere', () => {
    const part = layTrellis({ ...BUNDLED, columnNumbers: [4, 10, 11, 12, 13, 14, 30] });
    expect(texts(part)).toEqual(expect.arrayContaining(['e4', 'e10…14', 'e30']));
  });
});

describe('equal and bare wires', () => {
  it('hangs five equal wires as one double line and three bare ones as one dotted line', () => {
    const trellis = layTrellis(BUNDLED);
    expect(trellis.wires.map((w) => [w.first, w.last])).toEqual([
      [1, 1],
      [2, 6],
      [7, 7],
    ]);
    expect(texts(trellis)).toEqual(expect.arrayContaining(['e2…6', '×5', '3 bare', 'e7']));
    expect(trellis.marks.filter((m) => m.part.role === 'wire' && m.part.wire === 1)).toHaveLength(2);
    expect(overlaps(trellis)).toEqual([]);
  });

  it('leaves fewer than four apart, and bundles them on wish', () => {
    const three: TrellisInput = {
      ...BUNDLED,
      matrix: [
        [2, 1, 1, 0],
        [0, 0, 0, 1],
      ],
      zeroColumns: 0,
    };
    expect(layTrellis(three).wires).toHaveLength(4);
    expect(layTrellis(three, { bundleFrom: 2 }).wires).toHaveLength(3);
  });

  it('costs nothing for a million bare wires', () => {
    const trellis = layTrellis({ ...BUNDLED, zeroColumns: 999_993 });
    expect(trellis.marks.length).toBe(layTrellis(BUNDLED).marks.length);
    expect(trellis.height).toBe(layTrellis(BUNDLED).height);
    expect(texts(trellis)).toContain('999\u202f993 bare');
  });

  it('counts zero columns that are in the matrix', () => {
    const trellis = layTrellis({ ...BUNDLED, matrix: BUNDLED.matrix.map((row) => [0, ...row, 0]) });
    expect(trellis.bare).toBe(5);
    expect(trellis.wires.map((w) => w.columns)).toEqual([[1], [2, 3, 4, 5, 6], [7]]);
    expect(linesOf(BUNDLED)).toBe(4);
  });
});

describe('numbers', () => {
  const numbers: TrellisInput = {
    matrix: [
      [3, -12, 123, '1234567'],
      [0, 0, 0, 0],
      [-1, 1, -2, 0],
    ],
    names: ['a', 'b', 'c'],
    weights: ['1524172907896', 0, 6],
    edges: [[0, 2, -3]],
    radical: [[0, 1, 0]],
  };
  const trellis = layTrellis(numbers);

  it('are fruits with the number without sign, cut above six digits with the whole in the tip', () => {
    expect(texts(trellis)).toEqual(expect.arrayContaining(['3', '12', '123', '123…', '2']));
    const cut = trellis.marks.find((m) => m.kind === 'text' && m.tip?.startsWith('1234567'));
    expect(cut).toMatchObject({ tip: '1234567, 7 digits' });
    expect(trellis.marks.some((m) => m.kind === 'text' && m.tip === '1524172907896, 13 digits')).toBe(true);
  });

  it('make a circle up to two digits, then a capsule', () => {
    const size = SIZES.roomy;
    expect(fruitSize(size, 2n)).toMatchObject({ radius: 10.58, halfWidth: 10.58 });
    const two = fruitSize(size, -12n);
    expect(two.radius).toBe(two.halfWidth);
    const three = fruitSize(size, 123n);
    expect(three.halfWidth).toBeGreaterThan(three.radius);
  });

  it('are hollow for a negative entry', () => {
    const rounds = trellis.marks.filter((m) => m.kind === 'round' && m.part.role === 'fruit');
    // wire of 2: signed so that its first entry is positive, so −2 at c stays negative
    expect(rounds.filter((m) => m.kind === 'round' && m.fill === 'paper')).toHaveLength(1);
  });

  it('push the vertices apart where they need the room', () => {
    expect(layTrellis(numbers, { size: 'fine' }).px).toBeGreaterThan(SIZES.fine.px);
    for (const size of ['roomy', 'close', 'fine'] as const) expect(overlaps(layTrellis(numbers, { size }))).toEqual([]);
  });

  it('stand on edges that are not ±1, dashed where negative', () => {
    const edge = trellis.marks.find((m) => m.kind === 'path' && m.part.role === 'edge');
    expect(edge).toMatchObject({ dash: [5, 4] });
    expect(texts(trellis)).toContain('−3');
  });

  it('end the stem of a zero row in a foot above the first wire', () => {
    const foot = trellis.marks.find((m) => m.part.role === 'foot');
    expect(foot?.part.vertex).toBe(2);
    expect(foot?.kind === 'line' && foot.y1 < trellis.wires[0]!.y).toBe(true);
  });
});

describe('the radical', () => {
  const base = layTrellis({ ...BUNDLED, radical: [[1, 3]] });

  it('is a row of coefficients under an ink line', () => {
    expect(texts(base)).toEqual(expect.arrayContaining(['rad', '1', '3', '→ 0']));
    expect(base.radicalY).toBeGreaterThan(base.bareY);
    expect(overlaps(base)).toEqual([]);
  });

  it('is folded above three vectors, and unfolded on wish', () => {
    const radical = Array.from({ length: 7 }, (_, i) => [i + 1, 0]);
    expect(texts(layTrellis({ ...BUNDLED, radical }))).toContain('rad (7)');
    const unfolded = layTrellis({ ...BUNDLED, radical }, { unfoldRadical: true });
    expect(texts(unfolded).filter((t) => t === 'rad')).toHaveLength(7);
    expect(texts(unfolded).filter((t) => t === '·')).toHaveLength(7);
    expect(overlaps(unfolded)).toEqual([]);
  });
});

describe('sizes', () => {
  it('are chosen by vertices and lines', () => {
    expect(sizeFor(12, 14)).toBe('roomy');
    expect(sizeFor(13, 14)).toBe('close');
    expect(sizeFor(12, 15)).toBe('close');
    expect(sizeFor(30, 24)).toBe('close');
    expect(sizeFor(60, 40)).toBe('fine');
    expect(sizeFor(61, 2)).toBeNull();
    expect(sizeFor(2, 41)).toBeNull();
  });

  it('put one minus at the left of a fine one with negative weights', () => {
    const fine = layTrellis(chain(39), { size: 'fine' });
    expect(fine.minusAtLeft).toBe(true);
    expect(texts(fine).filter((t) => t === '2')).toHaveLength(39);
    expect(texts(fine).filter((t) => t === '−')).toHaveLength(1);
    expect(overlaps(fine)).toEqual([]);
    expect(
      layTrellis({ ...chain(39), weights: [2, ...new Array<number>(38).fill(-2)] }, { size: 'fine' }).minusAtLeft,
    ).toBe(false);
  });

  it('give rank 60 in Z^40 the room that the page has', () => {
    const wide = layTrellis(chain(60), { size: 'fine' });
    expect(wide.width).toBeGreaterThan(1080);
    expect(wide.width).toBeLessThan(1130);
  });

  it('lay nothing without complaint', () => {
    const empty = layTrellis({ matrix: [], names: [], weights: [], edges: [], zeroColumns: 3 });
    expect(empty.width).toBeGreaterThan(0);
    expect(empty.height).toBeGreaterThan(0);
    expect(texts(empty)).toEqual(['3 bare']);
  });
});
