/**
 * All ways to write R as a sum of at most s squares of positive integers, x_1 ≥ x_2 ≥ …: what the zero columns can
 * take of a row. Resumable, without recursion.
 *
 * Cuts, with their reasons:
 * * x_1² ≤ R and s·x_1² ≥ R, since x_1 is the largest of at most s.
 * * s = 1: R must be a square. s = 2: R ≢ 3 mod 4, since squares are 0 or 1 mod 4.
 * * s = 3: R is not 4^a(8b + 7) (Legendre; Hardy–Wright, ch. XX).
 * * s ≤ 4 and 8 | R: every x is even, because squares are 0, 1 or 4 mod 8 and an odd one would need at least 4 odd ones,
 *   whose squares sum to 4 mod 8 when there are exactly 4. So R is divided by 4 and the answers are doubled.
 */

/** Marks of a depth where nothing is left to spend: not yet told, and told. */
const NOTHING_LEFT = -1;
const SPENT = -2;

const PAUSED = -1;
const DONE = 0;
const FOUND = 1;

/** Largest integer x with x² ≤ r, for 0 ≤ r < 2^53. */
export function floorSqrt(r: number): number {
  let x = Math.floor(Math.sqrt(r));
  while (x * x > r) x -= 1;
  while ((x + 1) * (x + 1) <= r) x += 1;
  return x;
}

export class SquareSums {
  /** The values of the way that `next` found, descending; `length` of them count. */
  values: Float64Array = new Float64Array(8);
  length = 0;
  steps = 0;

  private rest: Float64Array = new Float64Array(8);
  private scale: Float64Array = new Float64Array(8);
  private bound: Float64Array = new Float64Array(8);
  private x: Float64Array = new Float64Array(8);
  private depth = -1;
  private slots = 0;

  /** Begins with R ≥ 0 (below 2^53) and at most `slots` squares. */
  start(r: number, slots: number): void {
    this.slots = slots;
    this.depth = -1;
    this.push(r, slots, 1, r);
  }

  /** Where it stands: what was chosen at each depth, in the words of this class. */
  state(): number[] {
    return Array.from(this.x.subarray(0, this.depth + 1));
  }

  /** Goes to where `state` was taken, after `start` with the same numbers. */
  restore(state: readonly number[]): void {
    this.depth = -1 + (state.length > 0 ? 1 : 0);
    state.forEach((x, d) => {
      this.x[d] = x;
      if (d + 1 === state.length) return;
      this.push(this.rest[d]! - x * x, this.slots - d - 1, this.scale[d]!, x);
    });
    if (state.at(-1) === SPENT) this.writeValues();
  }

  private writeValues(): void {
    this.length = this.depth;
    for (let i = 0; i < this.depth; i += 1) this.values[i] = this.x[i]! * this.scale[i]!;
  }

  private grow(): void {
    const size = this.x.length * 2;
    for (const key of ['rest', 'scale', 'bound', 'x', 'values'] as const) {
      const old = this[key];
      this[key] = new Float64Array(size);
      this[key].set(old);
    }
  }

  /** Opens a level: what is left, how many slots, in which scale, and the largest value allowed (in that scale). */
  private push(rest: number, slots: number, scale: number, bound: number): void {
    let [r, k, b] = [rest, scale, bound];
    if (slots <= 4) {
      while (r > 0 && r % 8 === 0) {
        r /= 4;
        k *= 2;
        b = Math.floor(b / 2);
      }
    }
    this.depth += 1;
    const d = this.depth;
    if (d + 1 >= this.x.length) this.grow();
    this.rest[d] = r;
    this.scale[d] = k;
    this.bound[d] = b;
    this.x[d] = r === 0 ? NOTHING_LEFT : hopeless(r, slots) ? 0 : Math.min(b, floorSqrt(r)) + 1;
  }

  /** 1: a way was found; 0: there is none left; −1: `limit` steps are used up, go on with the next call. */
  next(limit: number): typeof FOUND | typeof DONE | typeof PAUSED {
    const last = this.steps + limit;
    while (this.depth >= 0) {
      const d = this.depth;
      const r = this.rest[d]!;
      if (this.x[d] === NOTHING_LEFT) {
        // nothing left to spend: what stands above is one way
        this.x[d] = SPENT;
        this.writeValues();
        return FOUND;
      }
      const slots = this.slots - d;
      const x = this.x[d] === SPENT ? 0 : this.x[d]! - 1;
      if (x < 1 || x * x * slots < r) {
        this.depth -= 1;
        continue;
      }
      if (this.steps >= last) return PAUSED;
      this.steps += 1;
      this.x[d] = x;
      const rest = r - x * x;
      if (slots === 1 && rest !== 0) {
        this.depth -= 1;
        continue;
      }
      if (slots === 2 && rest !== 0) {
        const y = floorSqrt(rest);
        if (y * y !== rest || y > x) continue;
      }
      this.push(rest, slots - 1, this.scale[d]!, x);
    }
    return DONE;
  }
}

/** No way at all, by residues; r > 0. */
function hopeless(r: number, slots: number): boolean {
  if (slots === 0) return true;
  if (slots === 1) {
    const x = floorSqrt(r);
    return x * x !== r;
  }
  if (slots === 2) return r % 4 === 3;
  if (slots === 3) {
    let q = r;
    while (q % 4 === 0) q /= 4;
    return q % 8 === 7;
  }
  return false;
}
