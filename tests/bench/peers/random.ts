/** A stream of random numbers from a seed, so that every run measures the same instances (mulberry32, 32 bits of state). */

export interface Random {
  /** An integer in low..high, both included. */
  between(low: number, high: number): number;
  pick<T>(list: readonly T[]): T;
}

export function seededRandom(seed: number): Random {
  let state = seed >>> 0;
  const next = () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t = (t + Math.imul(t ^ (t >>> 7), t | 61)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
  const between = (low: number, high: number) => low + Math.floor(next() * (high - low + 1));
  return { between, pick: (list) => list[between(0, list.length - 1)]! };
}
