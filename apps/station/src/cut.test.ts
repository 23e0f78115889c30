import { describe, expect, it } from 'vitest';
import { longest } from './cut.ts';
import type { HeldParcel } from './held-parcel.ts';

const parcel = (pace: HeldParcel['pace'], canBeCut = true) => ({ pace, canBeCut }) as HeldParcel;

describe('the parcel to be cut', () => {
  const now = 100_000;

  it('is the one with most left to do by its own pace', () => {
    const nearlyDone = parcel({ sinceMs: now - 10_000, from: 0, done: 0.9 });
    const halfway = parcel({ sinceMs: now - 10_000, from: 0, done: 0.5 });
    const resumed = parcel({ sinceMs: now - 10_000, from: 0.4, done: 0.5 });
    expect(longest([nearlyDone, halfway], now)).toBe(halfway);
    expect(longest([nearlyDone, halfway, resumed], now)).toBe(resumed);
  });

  it('is none that has just begun, has not reported, is nearly done, or was asked to stop', () => {
    expect(
      longest(
        [
          parcel({ sinceMs: now - 500, from: 0, done: 0.1 }),
          parcel({ sinceMs: now - 9_000, from: null, done: 0 }),
          parcel({ sinceMs: now - 9_000, from: 0, done: 0.99 }),
          parcel({ sinceMs: now - 9_000, from: 0, done: 0.1 }, false),
        ],
        now,
      ),
    ).toBeNull();
  });
});
