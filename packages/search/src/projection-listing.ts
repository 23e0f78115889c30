/**
 * The children of one node, each once (FORMAT.md, rule C), with the projection bound (rule P) in exact integers.
 *
 * Columns are filled in the order of `pivots.ts`. For the row x, with S the free columns filled so far and R what is left
 * of the norm, two integers are carried: for each open class a the centre c_a = e·(entry of the shortest real completion),
 * and A = e·(R − squared length of that completion) ≥ 0. Filling free column p with x:
 *   c_a' = (e'·c_a + g_ap·(c_p − e·x)) / e,   A' = (e'·A − (c_p − e·x)²) / e.
 * Cuts, with their reasons:
 * * P: A' ≥ 0 means (e·x − c_p)² ≤ e'·A, an interval of x. Nothing outside it can be completed.
 * * Forced columns: x = c_a / e must be an integer.
 * * The last free column when no column is zero: nothing may be left, A' = 0, so (e·x − c_p)² = e'·A is solved.
 * * Multisets: values of one class descend.
 *
 * Order of the children: by the values along the order of the columns, larger values first; then the squares that the
 * zero columns take, largest first. Every number is an integer in a double; quotients are rounded to the integer that they
 * are known to be (proved in `projection-form.ts`).
 */
import { LISTED, type Listed, type ListingState } from './listing.ts';
import { nearest, Pivots } from './pivots.ts';
import { SquareSums } from './square-sums.ts';

/** Below this the root of a double is rounded down to the right integer; above it one too many is allowed for. */
const ROOT_EXACT = 2 ** 52;
/** Multiply-and-adds that weigh as much as one step. */
const WORK_PER_STEP = 32;

export class ProjectionListing {
  steps = 0;
  /** The node: its classes, each with its class in the parent (−1: the zero columns), its entry in the last row, its size. */
  classes = 0;
  readonly parent: Int32Array;
  readonly value: Float64Array;
  readonly mult: Int32Array;
  zeros = 0;
  /** D·(projection on the rows so far), lower triangle by classes, at a·cap + b. */
  readonly g: Float64Array;
  /** D of the parent times the part of the last row outside the span of the rows before it, by classes. */
  readonly outside: Float64Array;
  /** Centres by free steps: D·(projection of the next row) comes first. */
  readonly centre: Float64Array;
  /** Values by column: those of class a begin at first[a]. */
  readonly x: Float64Array;
  readonly first: Int32Array;
  readonly squares = new SquareSums();

  private readonly pivots: Pivots;
  private readonly left: Float64Array;
  private readonly low: Float64Array;
  private readonly stride: Float64Array;
  /** Column that each step fills. */
  private readonly column: Int32Array;
  private readonly filled: Int32Array;
  private freeTotal = 0;
  private pos = 0;
  private free = 0;
  private entering = false;
  private inSquares = false;

  /** @param cap most columns a node can have */
  constructor(private readonly cap: number) {
    this.parent = new Int32Array(cap);
    this.value = new Float64Array(cap);
    this.mult = new Int32Array(cap);
    this.g = new Float64Array(cap * cap);
    this.outside = new Float64Array(cap);
    this.centre = new Float64Array((cap + 1) * cap);
    this.x = new Float64Array(cap);
    this.first = new Int32Array(cap + 1);
    this.pivots = new Pivots(cap);
    this.left = new Float64Array(cap + 1);
    this.low = new Float64Array(cap);
    this.stride = new Float64Array(cap);
    this.column = new Int32Array(cap);
    this.filled = new Int32Array(cap);
  }

  /** Begins listing at depth k. `centre` holds the first centres. @param minor D_k; @param nextMinor D_{k+1} */
  begin(depth: number, minor: number, nextMinor: number): void {
    let slots = 0;
    for (let a = 0; a < this.classes; a += 1) {
      this.first[a] = slots;
      this.filled[a] = 0;
      slots += this.mult[a]!;
    }
    this.freeTotal = slots - depth;
    this.left[0] = nextMinor;
    this.pivots.begin(minor, this.g, this.classes, this.mult);
    this.pos = 0;
    this.free = 0;
    this.entering = true;
    this.inSquares = false;
    this.steps += 1 + Math.floor((this.classes * this.classes) / WORK_PER_STEP);
  }

  /** The next child, or that there is none left, or that `limit` steps are used up. */
  next(limit: number): Listed {
    const last = this.steps + limit;
    if (this.inSquares) {
      const listed = this.nextSquares(last);
      if (listed !== LISTED.done) return listed;
      this.inSquares = false;
      if (!this.backUp()) return LISTED.done;
    }
    const { pivots, x, column, low, stride, freeTotal } = this;
    const { forced } = pivots;
    for (;;) {
      if (this.steps >= last) return LISTED.paused;
      this.steps += 1;
      const { pos } = this;
      if (this.entering) {
        if (this.free === freeTotal) {
          if (this.complete()) {
            this.inSquares = true;
            const listed = this.nextSquares(last);
            if (listed !== LISTED.done) return listed;
            this.inSquares = false;
          }
          if (!this.backUp()) return LISTED.done;
          continue;
        }
        if (pos === pivots.planned) this.planStep();
        if (forced[pos] === 1) {
          if (this.force()) this.pos += 1;
          else if (!this.backUp()) return LISTED.done;
          continue;
        }
        this.openRange();
        this.entering = false;
      } else x[column[pos]!]! -= stride[pos]!;
      if (x[column[pos]!]! < low[pos]!) {
        if (!this.backUp()) return LISTED.done;
      } else if (this.fill()) {
        this.pos += 1;
        this.entering = true;
      }
    }
  }

  private nextSquares(last: number): Listed {
    const { squares } = this;
    const before = squares.steps;
    const listed = squares.next(last - this.steps);
    this.steps += squares.steps - before;
    return listed;
  }

  private planStep(): void {
    const { pivots } = this;
    const before = pivots.work;
    pivots.plan();
    this.steps += Math.floor((pivots.work - before) / WORK_PER_STEP);
    const p = pivots.stepClass[this.pos]!;
    this.column[this.pos] = this.first[p]! + this.filled[p]!;
    this.filled[p]! += 1;
  }

  /** Back to the last free step that is filled, so that its next value is tried. False if there is none. */
  private backUp(): boolean {
    this.pos -= 1;
    while (this.pos >= 0 && this.pivots.forced[this.pos] === 1) this.pos -= 1;
    if (this.pos < 0) return false;
    this.free -= 1;
    this.entering = false;
    return true;
  }

  /** Fills a forced column, if its value is an integer and in turn. */
  private force(): boolean {
    const p = this.pivots.stepClass[this.pos]!;
    return this.place(p, this.column[this.pos]!, this.centre[this.free * this.cap + p]! / this.pivots.e[this.free]!);
  }

  private place(p: number, column: number, v: number): boolean {
    if (v !== Math.floor(v)) return false;
    if (column > this.first[p]! && this.x[column - 1]! < v) return false;
    this.x[column] = v;
    return true;
  }

  /** The values that rule P allows in the free column of this step, put as the first of them, the last and the stride. */
  private openRange(): void {
    const { pos, free } = this;
    const p = this.pivots.stepClass[pos]!;
    const e = this.pivots.e[free]!;
    const c = this.centre[free * this.cap + p]!;
    const room = this.pivots.e[free + 1]! * this.left[free]!;
    const root = Math.floor(Math.sqrt(room)) + (room < ROOT_EXACT ? 0 : 1);
    const solve = this.zeros === 0 && free + 1 === this.freeTotal;
    let high = Math.floor((c + root) / e);
    const low = Math.ceil((c - root) / e);
    // A' = 0 has at most the two ends as solutions
    this.stride[pos] = solve && low < high ? high - low : 1;
    const column = this.column[pos]!;
    if (column > this.first[p]!) {
      const before = this.x[column - 1]!;
      if (before < high) high = solve ? (low <= before ? low : low - 1) : before;
    }
    this.x[column] = high;
    this.low[pos] = low;
  }

  /** Puts the value of this step in, if rule P allows it: what is left, and the centres of the open classes. */
  private fill(): boolean {
    const { pos, free, cap, centre, pivots } = this;
    const { open, row } = pivots;
    const e = pivots.e[free]!;
    const next = pivots.e[free + 1]!;
    const over = pivots.inverse[free]!;
    const base = free * cap;
    const y = centre[base + pivots.stepClass[pos]!]! - e * this.x[this.column[pos]!]!;
    const left = nearest((next * this.left[free]! - y * y) * over);
    if (left < 0 || (left > 0 && this.zeros === 0 && free + 1 === this.freeTotal)) return false;
    this.left[free + 1] = left;
    for (let i = 0, count = pivots.afterFree[free]!; i < count; i += 1) {
      const at = base + open[i]!;
      centre[at + cap] = nearest((next * centre[at]! + row[at]! * y) * over);
    }
    this.free += 1;
    return true;
  }

  /** All free columns are filled: are the others integers, and may the zero columns take what is left? */
  private complete(): boolean {
    const { cap, free, pivots } = this;
    const e = pivots.e[free]!;
    const rest = this.left[free]! / e;
    if (rest !== Math.floor(rest) || (rest !== 0 && this.zeros === 0)) return false;
    for (let i = 0; i < pivots.openCount; i += 1) {
      const a = pivots.open[i]!;
      if (!this.place(a, this.first[a]! + this.mult[a]! - 1, this.centre[free * cap + a]! / e)) return false;
    }
    this.squares.start(rest, this.zeros);
    return true;
  }

  /** Where it stands, in few numbers: how many steps are filled, their values, what is tried, the squares. */
  state(): ListingState {
    const nonzero: (readonly [number, number])[] = [];
    for (let step = 0; step < this.pos; step += 1) {
      const v = this.x[this.column[step]!]!;
      if (v !== 0) nonzero.push([step, v]);
    }
    return {
      filled: this.pos,
      nonzero,
      trying: this.entering || this.inSquares ? null : this.x[this.column[this.pos]!]!,
      squares: this.inSquares ? this.squares.state() : null,
    };
  }

  /** Goes to where `state` was taken, after `begin` for the same node. */
  restore(state: ListingState): void {
    const values = new Map(state.nonzero);
    while (this.pos < state.filled) {
      this.planStep();
      if (this.pivots.forced[this.pos] === 1) this.force();
      else {
        this.openRange();
        this.x[this.column[this.pos]!] = Number(values.get(this.pos) ?? 0);
        this.fill();
      }
      this.pos += 1;
    }
    if (state.trying !== null) {
      this.planStep();
      this.openRange();
      this.x[this.column[this.pos]!] = Number(state.trying);
      this.entering = false;
    }
    if (state.squares === null) return;
    this.complete();
    this.inSquares = true;
    this.squares.restore(state.squares);
  }

  get bytes(): number {
    return this.pivots.bytes + 16 * this.cap * this.cap + 80 * this.cap;
  }
}
