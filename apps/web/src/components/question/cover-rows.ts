/** Where the blocks of the cover stand: shares become widths, a gap of one pixel between blocks that can spare it. */
import type { ParcelView } from '@palmette/contracts';

export interface CoverBlock {
  readonly no: string;
  readonly state: ParcelView['state'];
  readonly x: number;
  readonly width: number;
  /** 0 to 1 of the block. */
  readonly done: number;
}

/** Narrower blocks lose their gap, so that no parcel vanishes. */
const SPARES_A_GAP = 3;

/**
 * @param width of one row in pixels @param rows how many rows the cover is folded into
 * @returns one list of blocks for each row; a parcel that crosses a fold stands in both
 */
export function coverRows(parcels: readonly ParcelView[], width: number, rows: 1 | 2): CoverBlock[][] {
  const sum = parcels.reduce((total, parcel) => total + parcel.share, 0);
  const length = width * rows;
  const placed: CoverBlock[][] = Array.from({ length: rows }, () => []);
  let at = 0;
  for (const parcel of parcels) {
    const size = sum > 0 ? (parcel.share / sum) * length : length / parcels.length;
    for (let row = Math.floor(at / width); row < rows && at + size > row * width; row += 1) {
      const from = Math.max(at, row * width) - row * width;
      const to = Math.min(at + size, (row + 1) * width) - row * width;
      if (to <= from) continue;
      const gap = to - from > SPARES_A_GAP ? 1 : 0;
      const done = parcel.state === 'done' ? 1 : Math.min(1, Math.max(0, parcel.done));
      placed[row]!.push({ no: `${parcel.no}-${row}`, state: parcel.state, x: from, width: to - from - gap, done });
    }
    at += size;
  }
  return placed;
}
