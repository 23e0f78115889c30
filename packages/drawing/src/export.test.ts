import { describe, expect, it } from 'vitest';
import { matrixToLatex } from './latex-matrix.ts';
import { PRINT } from './palettes.ts';
import { trellisOnPaper } from './paper.ts';
import { drawingToSvg } from './svg.ts';
import { drawingToTikz } from './tikz.ts';
import { layTrellis, type TrellisInput } from './trellis.ts';

const SMALL: TrellisInput = {
  matrix: [
    [1, 2, 0],
    [-1, 0, 1],
  ],
  zeroColumns: 1_000,
  names: ['a', 'b'],
  weights: [-5, -2],
  edges: [[0, 1, -1]],
  radical: [[1, 0]],
};

const chain = (length: number): TrellisInput => ({
  matrix: Array.from({ length }, (_, i) =>
    Array.from({ length: length + 1 }, (_, j) => (j === i ? 1 : j === i + 1 ? -1 : 0)),
  ),
  names: Array.from({ length }, (_, i) => `v${i + 1}`),
  weights: new Array<number>(length).fill(-2),
  edges: Array.from({ length: length - 1 }, (_, i) => [i, i + 1, 1]),
});

describe('SVG', () => {
  const svg = drawingToSvg(layTrellis(SMALL), { title: 'a < b & "c"', description: 'two vertices' });

  it('has title and description, text as text, and nothing that runs', () => {
    expect(svg).toContain('<title>a &lt; b &amp; &quot;c&quot;</title>');
    expect(svg).toContain('<desc>two vertices</desc>');
    expect(svg).toContain('>e<tspan');
    expect(svg).toContain('1000 bare');
    expect(svg).not.toMatch(/<script|<style|on\w+=|href/);
  });

  it('is well formed: every tag is closed in turn', () => {
    const open: string[] = [];
    for (const [, slash, name, self] of svg.matchAll(/<(\/?)([a-z]+)[^>]*?(\/?)>/g)) {
      if (slash === '/') expect(open.pop()).toBe(name);
      else if (self !== '/') open.push(name!);
    }
    expect(open).toEqual([]);
    expect(svg).not.toMatch(/NaN|undefined|Infinity/);
  });

  it('is ink without hairs in print, and turned on wish', () => {
    const print = drawingToSvg(layTrellis(SMALL), {
      title: 't',
      palette: PRINT,
      physicalWidth: { value: 16, unit: 'cm' },
      turned: true,
    });
    expect(print).not.toContain('#2E6A3B');
    expect(print.match(/<line/g)!.length).toBeLessThan(svg.match(/<line/g)!.length);
    expect(print).toContain('width="16cm"');
    expect(print).toContain('rotate(-90)');
  });
});

describe('TikZ', () => {
  it('draws the same marks, balanced, without a library', () => {
    const { trellis, fit } = trellisOnPaper(SMALL);
    const tikz = drawingToTikz(trellis, { title: 'P(3)\nsecond line', fit });
    expect(tikz.startsWith('% P(3)\n% second line\n\\begin{tikzpicture}')).toBe(true);
    expect(tikz).toContain('{$e_{1}$}');
    expect(tikz).toContain('{$-5$}');
    expect(tikz).toContain('\\mathrm{bare}');
    expect(tikz).toContain('\\to ');
    expect(tikz).toContain('dash pattern');
    expect(tikz).not.toMatch(/[−…×→·]|NaN|undefined/);
    expect([...tikz].filter((c) => c === '{').length).toBe([...tikz].filter((c) => c === '}').length);
    expect(
      tikz
        .split('\n')
        .filter((l) => l.startsWith('  '))
        .every((l) => l.endsWith(';')),
    ).toBe(true);
  });
});

describe('paper', () => {
  it('is at most 16 cm wide with letters of 6 pt or more, else turned', () => {
    const small = trellisOnPaper(SMALL);
    expect(small.trellis.size.name).toBe('roomy');
    expect(small.fit.widthCm).toBeLessThan(16);
    const middle = trellisOnPaper(chain(24));
    expect(middle.trellis.size.name).toBe('close');
    expect(middle.fit.widthCm).toBeCloseTo(16, 6);
    expect(middle.trellis.size.font * middle.fit.pointsPerPixel).toBeGreaterThanOrEqual(6);
    const wide = trellisOnPaper(chain(60));
    expect(wide.trellis.size.name).toBe('fine');
    expect(wide.fit).toMatchObject({ turned: true });
    expect(wide.fit.widthCm).toBeLessThanOrEqual(24.000001);
  });
});

describe('LaTeX matrix', () => {
  it('has brackets, and a setting above ten columns', () => {
    expect(
      matrixToLatex([
        [1, -1],
        ['0', 2n],
      ]),
    ).toBe('\\begin{bmatrix}\n  1 & -1 \\\\\n  0 & 2\n\\end{bmatrix}\n');
    expect(matrixToLatex([new Array<number>(11).fill(1)])).toContain('\\setcounter{MaxMatrixCols}{11}');
  });
});
