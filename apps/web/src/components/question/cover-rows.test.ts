import { describe, expect, it } from 'vitest';
import type { ParcelView } from '@palmette/contracts';
import { coverRows } from './cover-rows.ts';

const parcels: ParcelView[] = [
  { no: 1, share: 0.5, done: 1, state: 'done' },
  { no: 2, share: 0.3, done: 0.4, state: 'in hand' },
  { no: 3, share: 0.2, done: 0, state: 'waiting' },
];

describe('the blocks of the cover', () => {
  it('are as wide as their share of the tree', () => {
    const [row] = coverRows(parcels, 1000, 1);
    expect(row!.map((b) => [b.x, b.width, b.done])).toEqual([
      [0, 499, 1],
      [500, 299, 0.4],
      [800, 199, 0],
    ]);
  });

  it('are folded into two rows; a parcel that crosses the fold stands in both', () => {
    const rows = coverRows(parcels, 350, 2);
    expect(rows.map((row) => row.map((b) => b.no))).toEqual([['1-0'], ['2-1', '3-1']]);
    const crossing = coverRows([{ no: 1, share: 1, done: 0, state: 'waiting' }], 100, 2);
    expect(crossing.map((row) => row[0]!.width)).toEqual([99, 99]);
  });

  it('never vanish, however thin, and never leave the row', () => {
    const many = Array.from({ length: 2_000 }, (_, no): ParcelView => ({
      no,
      share: 1 / 2_000,
      done: 0,
      state: 'waiting',
    }));
    const [row] = coverRows(many, 300, 1);
    expect(row).toHaveLength(2_000);
    expect(row!.every((b) => b.width > 0 && b.x + b.width <= 300.0001)).toBe(true);
  });

  it('share the row alike where no share is known', () => {
    const [row] = coverRows(
      parcels.map((p) => ({ ...p, share: 0 })),
      300,
      1,
    );
    expect(row!.map((b) => b.x)).toEqual([0, 100, 200]);
  });
});
