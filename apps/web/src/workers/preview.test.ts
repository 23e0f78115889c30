import { describe, expect, it } from 'vitest';
import { buildLattice, readSourceText } from '@palmette/lattice';
import type { Source, Target } from '@palmette/contracts';
import { arithmeticReading, quickLook } from './preview-quick.ts';
import { readingOf } from './preview-reading.ts';

const source = (text: string) => readSourceText(text) as Source;
const look = (text: string, target: Target, scope: 'one' | 'all' = 'all') =>
  quickLook(buildLattice(source(text)), { source: source(text), target, scope }, () => 0);

describe('as read', () => {
  const read = (text: string) => readingOf(source(text), buildLattice(source(text)));

  it('tells rank, form and star of P(3, 5, −7)', () => {
    const reading = read('P(3, 5, -7)');
    expect(reading).toMatchObject({ rank: 8, determinant: '41', definiteness: 'negative definite' });
    expect(reading.star).toBe('e_0 = −2; legs 3/2, 5/4, 7/1');
    expect(reading.weights.join(' ')).toBe('-2 -2 -2 -2 -2 -2 -2 -7');
    expect(reading.form![0]!.join(' ')).toBe('-2 1 0 1 0 0 0 1');
    expect(reading.other).toEqual({
      sentence: 'The mirror image gives an indefinite star, signature (1, 8): not offered.',
    });
  });

  it('offers both chains of a fraction', () => {
    const reading = read('17/5');
    expect(reading.remarks[0]).toContain('[4, 2, 3]');
    expect(reading.other?.sentence).toContain('[2, 2, 4, 2], rank 4');
    expect(reading.other?.source).toMatchObject({ orientation: 'dual' });
    expect(reading.star).toBeNull();
  });

  it('draws a sparse matrix as a graph, and no dense one', () => {
    expect(read('[[2,-1],[-1,2]]').edges).toEqual([[0, 1, -1]]);
    const dense = Array.from({ length: 9 }, (_, i) => Array.from({ length: 9 }, (_, j) => (i === j ? 20 : 1)));
    expect(read(JSON.stringify(dense)).edges).toBeNull();
  });
});

describe('arithmetic', () => {
  const arithmetic = (text: string, target: Target) => arithmeticReading(buildLattice(source(text)), target);

  it('settles 17/5 at its rank, and leaves Z^5 to a search', () => {
    expect(arithmetic('17/5', { excess: 0 })).toEqual({
      excluded: [{ dimension: 3, ground: { ground: 'determinant' } }],
      nowhere: null,
      settled: true,
      next: null,
    });
    const least = arithmetic('17/5', { least: {} });
    // MATHEMATICS.md 3: 17/5 in Z^4 fails at p = 2 and p = 17
    expect(least.excluded[1]).toEqual({ dimension: 4, ground: { ground: 'hilbert', primes: ['2', '17'] } });
    expect(least).toMatchObject({ settled: false, next: 5 });
    expect(arithmetic('17/5', { least: { upTo: 4 } }).settled).toBe(true);
    expect(arithmetic('17/5', { least: { upTo: 2 } }).excluded).toEqual([
      { dimension: 2, ground: { ground: 'dimension' } },
    ]);
    expect(arithmetic('17/5', { any: true })).toMatchObject({ settled: false, next: null });
  });
});

describe('columns that do not span', () => {
  // Conway and Sloane, SPLAG, ch. 4: the dual of E6 has minimal norm 4/3, that of E7 3/2, E8 is its own with norm 2
  it.each(['E6', 'E7', 'E8'])('exclude %s from every Z^n before any search', (name) => {
    const lattice = buildLattice(source(name));
    const nowhere = { ground: 'column', vectors: '0', spanned: 0 };
    for (const target of [{ any: true } as const, { least: {} }, { least: { upTo: 20 } }])
      expect(arithmeticReading(lattice, target)).toEqual({
        excluded: [{ dimension: null, ground: nowhere }],
        nowhere,
        settled: true,
        next: null,
      });
    for (const excess of [0, 1, 2, 9])
      expect(arithmeticReading(lattice, { excess })).toMatchObject({ nowhere, settled: true });
  });

  it('exclude a sum with such a summand, counted by its columns', () => {
    // E6 + <1>: only the column of the unit vector, which spans dimension 1 of 7
    const e6 = buildLattice(source('E6')).gram.map((row) => row.map(Number));
    const rows = [...e6.map((row) => [...row, 0]), [0, 0, 0, 0, 0, 0, 1]];
    const { nowhere } = arithmeticReading(buildLattice({ kind: 'matrix', rows }), { any: true });
    expect(nowhere).toEqual({ ground: 'column', vectors: '1', spanned: 1 });
  });

  it('say nothing about a lattice that embeds', () => {
    for (const name of ['D4', 'A5', '17/5'])
      expect(arithmeticReading(buildLattice(source(name)), { any: true }).nowhere).toBeNull();
  });
});

describe('the quick look', () => {
  it('finds the only embedding of P(3, 5, −7), which multiplies back to its form', () => {
    const quick = look('P(3, 5, -7)', { least: {} });
    expect(quick).toMatchObject({ kind: 'done', verdict: 'embeds', dimension: 9, orbits: '1', complete: true });
    const a = quick.kind === 'done' ? quick.first!.matrix.map((row) => row.map(Number)) : [];
    const { gram } = buildLattice(source('P(3, 5, -7)'));
    expect(a.map((r) => a.map((s) => BigInt(r.reduce((sum, x, k) => sum + x * s[k]!, 0))))).toEqual(gram);
  });

  it('excludes E6 from every Z^n', () => {
    expect(look('E6', { any: true })).toMatchObject({
      kind: 'done',
      verdict: 'excluded',
      dimension: null,
      first: null,
    });
  });

  it('stops at its bound and says how long the whole may take', () => {
    let clock = 0;
    // six orthogonal vectors of norm 12 in Z^9: far more than 500 nodes
    const rows = Array.from({ length: 6 }, (_, i) => Array.from({ length: 6 }, (_, j) => (i === j ? 12 : 0)));
    const order = { source: { kind: 'matrix' as const, rows }, target: { dimension: 9 }, scope: 'all' as const };
    const quick = quickLook(buildLattice(order.source), order, () => (clock += 150));
    expect(quick).toMatchObject({ kind: 'unfinished', dimension: 9 });
    const { seconds, nodes } = quick as Extract<typeof quick, { kind: 'unfinished' }>;
    expect(Number(nodes)).toBeGreaterThan(0);
    expect(seconds!.low).toBeLessThanOrEqual(seconds!.likely);
    expect(seconds!.likely).toBeLessThanOrEqual(seconds!.high);
  });

  it('goes on with frames where rows do not end in their half', () => {
    // B·Bᵀ for a random B with entries −1, 0, 1: rows are lost in it, the unit columns are few
    let state = 7;
    const next = () => (state = (state * 48271) % 2147483647);
    const b: number[][] = Array.from({ length: 14 }, () => Array.from({ length: 14 }, () => (next() % 3) - 1));
    const rows = b.map((x) => b.map((y) => x.reduce((sum, e, c) => sum + e * y[c]!, 0)));
    const order = { source: { kind: 'matrix' as const, rows }, target: { excess: 0 }, scope: 'all' as const };
    const quick = quickLook(buildLattice(order.source), order, () => 0);
    expect(quick).toMatchObject({ kind: 'done', verdict: 'embeds', orbits: '1', complete: true });
    // the half of rows is counted too: they did not end in it
    expect(Number((quick as { nodes: string }).nodes)).toBeGreaterThanOrEqual(50_000);
  });

  it('does not try what is too big', () => {
    expect(look('[' + new Array(130).fill(2).join(',') + ']', { excess: 1 })).toMatchObject({ kind: 'none' });
  });
});
