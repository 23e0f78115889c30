/** A small generator with a given seed (xorshift, Marsaglia, J. Stat. Software 8 (2003)): the same seed, the same probes. */
export function randomBelow(seed: number): (below: number) => number {
  let x = seed | 0 || 0x9e3779b9 | 0;
  return (below) => {
    x ^= x << 13;
    x ^= x >>> 17;
    x ^= x << 5;
    return (x >>> 0) % below;
  };
}
