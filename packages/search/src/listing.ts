/**
 * The children of one node, each once (FORMAT.md, rule C): for every class of equal columns a multiset of integers,
 * descending, for the zero columns a multiset of positive integers. Resumable after any step; no recursion.
 *
 * All values are integers kept in doubles: with every norm below 2^25 (checked before, see `working-form.ts`) no
 * intermediate reaches 2^53, so the arithmetic is exact. The one square root is used only to propose a range, which is
 * widened by more than its error.
 *
 * Cuts, with their reasons. R: norm still to spend; b_i: inner product with row i still to reach; S_i: sum of squares
 * of row i over the columns still to fill.
 * * Cauchy–Schwarz: b_i² ≤ R·S_i. Before a value v is tried in a column with entry p of row i, the v with
 *   (b_i − p v)² ≤ (R − v²)(S_i − p²) are an interval; only they are tried.
 * * Last column of row i (S_i = p²): p v = b_i exactly.
 * * R = 0: everything left is 0, so every b_i must be 0 already.
 */
import { Columns } from './columns.ts';
import { SlotOrder } from './slot-order.ts';
import { SquareSums } from './square-sums.ts';

/** More than the rounding error of a range end: roots are below 2^13, computed with relative error below 2^-49. */
const SLACK = 1e-6;

export const LISTED = { found: 1, done: 0, paused: -1 } as const;
export type Listed = (typeof LISTED)[keyof typeof LISTED];

/** JSON: enough to go on after a restart. */
export interface ListingState {
  readonly filled: number;
  readonly nonzero: readonly (readonly [slot: number, value: number | string])[];
  readonly trying: number | string | null;
  readonly squares: readonly number[] | null;
}

export class Listing {
  readonly columns = new Columns();
  steps = 0;

  private readonly order = new SlotOrder();
  private readonly squares = new SquareSums();
  private depth = 0;
  private slots = 0;
  private slotClass = new Int32Array(16);
  private val = new Float64Array(16);
  private low = new Float64Array(16);
  private rest = new Float64Array(17);
  private b = new Float64Array(4);
  private s = new Float64Array(4);
  /** Rows whose inner product is not reached yet. */
  private unmet = 0;
  private pos = 0;
  private entering = false;
  private inSquares = false;

  /** Begins listing for a row of the given norm. `target` and `norms` are read up to `depth`. */
  begin(depth: number, norm: number, target: Float64Array, norms: Float64Array): void {
    this.depth = depth;
    if (depth > this.b.length) {
      this.b = new Float64Array(depth * 2);
      this.s = new Float64Array(depth * 2);
    }
    this.unmet = 0;
    for (let i = 0; i < depth; i += 1) {
      this.b[i] = target[i]!;
      this.s[i] = norms[i]!;
      if (target[i] !== 0) this.unmet += 1;
    }
    this.order.arrange(this.columns, depth, target);
    this.slots = 0;
    for (let k = 0; k < this.columns.count; k += 1) {
      const c = this.order.classes[k]!;
      const m = this.columns.mult[c]!;
      this.reserveSlots(this.slots + m);
      this.slotClass.fill(c, this.slots, this.slots + m);
      this.slots += m;
    }
    this.rest[0] = norm;
    this.pos = 0;
    this.entering = true;
    this.inSquares = false;
  }

  /** Where it stands, in few numbers: the slots that are filled, their nonzero values, what is tried, the squares. */
  state(): ListingState {
    const nonzero: (readonly [number, number])[] = [];
    for (let slot = 0; slot < this.pos; slot += 1) if (this.val[slot] !== 0) nonzero.push([slot, this.val[slot]!]);
    return {
      filled: this.pos,
      nonzero,
      trying: this.entering || this.inSquares ? null : this.val[this.pos]!,
      squares: this.inSquares ? this.squares.state() : null,
    };
  }

  /** Goes to where `state` was taken, after `begin` for the same row. */
  restore(state: ListingState): void {
    const values = new Map(state.nonzero);
    while (this.pos < state.filled) {
      this.openRange();
      this.val[this.pos] = Number(values.get(this.pos) ?? 0);
      this.fill();
      this.pos += 1;
    }
    if (state.trying !== null) {
      this.openRange();
      this.val[this.pos] = Number(state.trying);
      this.entering = false;
    }
    if (state.squares === null) return;
    this.entering = false;
    this.inSquares = true;
    this.squares.start(this.rest[this.pos]!, this.columns.zeros);
    this.squares.restore(state.squares);
  }

  private reserveSlots(size: number): void {
    if (size < this.val.length) return;
    const grown = Math.max(size + 1, this.val.length * 2);
    const copy = <T extends Float64Array | Int32Array>(from: T, to: T): T => {
      to.set(from);
      return to;
    };
    this.slotClass = copy(this.slotClass, new Int32Array(grown));
    this.val = copy(this.val, new Float64Array(grown));
    this.low = copy(this.low, new Float64Array(grown));
    this.rest = copy(this.rest, new Float64Array(grown + 1));
  }

  /** The next child, or that there is none left, or that `limit` steps are used up. */
  next(limit: number): Listed {
    const last = this.steps + limit;
    for (;;) {
      if (this.inSquares) {
        const before = this.squares.steps;
        const listed = this.squares.next(last - this.steps);
        this.steps += this.squares.steps - before;
        if (listed !== LISTED.done) return listed;
        this.inSquares = false;
        if (!this.backUp()) return LISTED.done;
        continue;
      }
      if (this.steps >= last) return LISTED.paused;
      this.steps += 1;
      if (this.entering) {
        this.entering = false;
        if (this.pos === this.slots || this.rest[this.pos] === 0) {
          if (this.canEndHere()) {
            this.squares.start(this.rest[this.pos]!, this.columns.zeros);
            this.inSquares = true;
          } else if (!this.backUp()) return LISTED.done;
          continue;
        }
        this.openRange();
      } else this.val[this.pos]! -= 1;
      if (this.val[this.pos]! < this.low[this.pos]!) {
        this.pos -= 1;
        if (this.pos < 0) return LISTED.done;
        this.undo();
        continue;
      }
      if (this.fill()) {
        this.pos += 1;
        this.entering = true;
      }
    }
  }

  /** All slots filled, or nothing left to spend: are the inner products met, and may the rest be zeros? */
  private canEndHere(): boolean {
    if (this.unmet !== 0) return false;
    if (this.pos === this.slots || this.pos === 0) return true;
    // zeros stand before negative values in a class
    return !(this.slotClass[this.pos] === this.slotClass[this.pos - 1] && this.val[this.pos - 1]! < 0);
  }

  /** Undoes the last filled slot, so that its next value is tried. False if there is none. */
  private backUp(): boolean {
    this.pos -= 1;
    if (this.pos < 0) return false;
    this.undo();
    return true;
  }

  /** The interval of values that Cauchy–Schwarz allows in the column at `pos`, put as val = high + 1 − 1 and low. */
  private openRange(): void {
    const { pos } = this;
    const c = this.slotClass[pos]!;
    const r = this.rest[pos]!;
    const root = Math.sqrt(r) + SLACK;
    let high = Math.floor(root);
    let low = -high;
    if (pos > 0 && this.slotClass[pos - 1] === c && this.val[pos - 1]! < high) high = this.val[pos - 1]!;
    const { start, rows, vals } = this.columns;
    for (let e = start[c]!, end = start[c + 1]!; e < end; e += 1) {
      const i = rows[e]!;
      const p = vals[e]!;
      const b = this.b[i]!;
      const whole = this.s[i]!;
      const inside = r * whole - b * b;
      if (inside < 0) {
        high = 0;
        low = 1;
        break;
      }
      const spread = Math.sqrt((whole - p * p) * inside) / whole + SLACK;
      const middle = (b * p) / whole;
      const top = Math.floor(middle + spread);
      const bottom = Math.ceil(middle - spread);
      if (top < high) high = top;
      if (bottom > low) low = bottom;
    }
    this.val[pos] = high;
    this.low[pos] = low;
  }

  /** Puts the value at `pos` in, if no row that ends here is missed. */
  private fill(): boolean {
    const { pos } = this;
    const c = this.slotClass[pos]!;
    const v = this.val[pos]!;
    const rest = this.rest[pos]! - v * v;
    if (rest < 0) return false;
    const { start, rows, vals } = this.columns;
    const end = start[c + 1]!;
    for (let e = start[c]!; e < end; e += 1) {
      const i = rows[e]!;
      const p = vals[e]!;
      if (this.s[i]! === p * p && this.b[i]! !== p * v) return false;
    }
    for (let e = start[c]!; e < end; e += 1) {
      const i = rows[e]!;
      const p = vals[e]!;
      this.s[i]! -= p * p;
      if (v === 0) continue;
      const before = this.b[i]!;
      const after = before - p * v;
      this.b[i] = after;
      if (before === 0) this.unmet += 1;
      else if (after === 0) this.unmet -= 1;
    }
    this.rest[pos + 1] = rest;
    return true;
  }

  private undo(): void {
    const { pos } = this;
    const c = this.slotClass[pos]!;
    const v = this.val[pos]!;
    const { start, rows, vals } = this.columns;
    for (let e = start[c]!, end = start[c + 1]!; e < end; e += 1) {
      const i = rows[e]!;
      const p = vals[e]!;
      this.s[i]! += p * p;
      if (v === 0) continue;
      const before = this.b[i]!;
      const after = before + p * v;
      this.b[i] = after;
      if (before === 0) this.unmet += 1;
      else if (after === 0) this.unmet -= 1;
    }
  }

  /** Writes the columns of the child that `next` found. */
  writeChild(into: Columns): void {
    const from = this.columns;
    into.reset(from.zeros - this.squares.length);
    for (let slot = 0; slot < this.slots;) {
      const c = this.slotClass[slot]!;
      const v = slot < this.pos ? this.val[slot]! : 0;
      let count = 1;
      while (
        slot + count < this.slots &&
        this.slotClass[slot + count] === c &&
        (slot + count < this.pos ? this.val[slot + count]! : 0) === v
      )
        count += 1;
      this.writeClass(into, c, v, count);
      slot += count;
    }
    for (let z = 0; z < this.squares.length;) {
      const x = this.squares.values[z]!;
      let count = 1;
      while (z + count < this.squares.length && this.squares.values[z + count] === x) count += 1;
      this.writeClass(into, -1, x, count);
      z += count;
    }
  }

  /** One class of the child: the entries of class `c` (−1: none), then v in the new row. */
  private writeClass(into: Columns, c: number, v: number, count: number): void {
    into.reserveClass();
    const from = this.columns;
    let at = into.start[into.count]!;
    const first = c < 0 ? 0 : from.start[c]!;
    const end = c < 0 ? 0 : from.start[c + 1]!;
    into.reserveEntries(at + end - first + 1);
    for (let e = first; e < end; e += 1, at += 1) {
      into.rows[at] = from.rows[e]!;
      into.vals[at] = from.vals[e]!;
    }
    if (v !== 0) {
      into.rows[at] = this.depth;
      into.vals[at] = v;
      at += 1;
    }
    into.mult[into.count] = count;
    into.count += 1;
    into.start[into.count] = at;
  }

  get bytes(): number {
    return (
      this.columns.bytes +
      8 * (this.val.length + this.low.length + this.rest.length + this.b.length + this.s.length) +
      4 * this.slotClass.length
    );
  }
}
