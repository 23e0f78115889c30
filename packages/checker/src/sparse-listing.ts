/**
 * The children of one node of the tree of rows, each once (FORMAT.md, rule C), where a node has many columns or numbers
 * are large: cuts N and CS of FORMAT.md and nothing else.
 *
 * Column by column the nonzero values of its copies are chosen, descending; then the column is closed, its other copies
 * staying 0. R is the norm still to spend, b_i what row i still has to be met by, S_i the squares of row i in copies that
 * are not decided. After each decision R ≥ 0 and b_i² ≤ R·S_i are asked for the rows that have an entry in the column.
 * A copy that is the last to meet a row gets b_i over its entry. At the end every b_i is 0 and R goes to zero columns as
 * squares.
 *
 * As doubles it is exact while every norm is below 2^25: |b_i| ≤ 2·2^25 and R·S_i < 2^50 throughout.
 */
import type { Int, Kind } from './int-kinds.ts';
import type { Filling, SparseNode } from './sparse-columns.ts';
import { SquareParts } from './square-parts.ts';
import { END, PAUSED, type Step, type Steps } from './steps.ts';

/** A decision at a column: a value for one more copy, or its closing. */
interface Frame {
  column: number;
  /** Norm still to spend before the decision. */
  rest: Int;
  /** The value that stands or was tried last; values go down to `low`, then the column is closed. */
  value: Int;
  low: Int;
  stands: 'nothing' | 'value' | 'closing';
}

export class SparseListing {
  private node: SparseNode = { columns: [], zeros: 0 };
  private order: number[] = [];
  private values: Int[][] = [];
  private readonly frames: Frame[] = [];
  private depth = -1;
  private readonly parts: SquareParts;
  private onZeros = false;
  /** b and S of each row, and how many b are not 0. */
  private readonly b: Int[];
  private readonly s: Int[];
  private unmet = 0;

  /** @param inner inner products of the new row with the rows before it; @param norms their norms */
  constructor(
    private readonly kind: Kind,
    private readonly norm: Int,
    private readonly inner: readonly Int[],
    private readonly norms: readonly Int[],
  ) {
    this.parts = new SquareParts(kind);
    this.b = [...inner];
    this.s = norms.slice(0, inner.length);
  }

  open(node: SparseNode): void {
    this.node = node;
    this.order = fillingOrder(node, this.kind.zero, this.inner);
    this.values = node.columns.map(() => []);
    this.unmet = 0;
    for (let i = 0; i < this.inner.length; i += 1) {
      this.b[i] = this.inner[i]!;
      this.s[i] = this.norms[i]!;
      if (this.inner[i] !== this.kind.zero) this.unmet += 1;
    }
    this.depth = -1;
    this.onZeros = false;
    this.goOn(0, this.norm);
  }

  get filling(): Filling {
    return {
      values: this.values,
      onZeros: Array.from({ length: this.parts.length }, (_, i) => this.parts.part(i)),
    };
  }

  next(steps: Steps): Step {
    for (;;) {
      if (this.onZeros) {
        const answer = this.parts.next(steps);
        if (answer !== END) return answer;
        this.onZeros = false;
        if (this.depth < 0) return END;
        continue;
      }
      if (this.depth < 0) return END;
      if (steps.left <= 0) return PAUSED;
      steps.left -= 1;
      const frame = this.frames[this.depth]!;
      if (frame.stands === 'closing') {
        this.close(frame, false);
        this.depth -= 1;
        continue;
      }
      if (frame.stands === 'value') this.unput(frame);
      frame.value -= this.kind.one;
      if (frame.value === this.kind.zero) frame.value -= this.kind.one;
      if (frame.value < frame.low) {
        if (this.close(frame, true)) this.goOn(frame.column + 1, frame.rest);
        continue;
      }
      const rest = frame.rest - frame.value * frame.value;
      if (rest >= this.kind.zero && this.put(frame, rest)) this.goOn(frame.column, rest);
    }
  }

  /** What has to be decided next when `column` is the first that is open: a frame, or zero columns, or nothing. */
  private goOn(column: number, rest: Int): void {
    const { zero, one, root } = this.kind;
    if (column === this.order.length || rest === zero) {
      if (this.unmet > 0) return;
      this.parts.open(rest, this.node.zeros);
      this.onZeros = true;
      return;
    }
    this.depth += 1;
    const c = this.order[column]!;
    const list = this.values[c]!;
    const { count, rows, entries } = this.node.columns[c]!;
    const most = root(rest);
    const before = list.length > 0 ? list[list.length - 1]! : most;
    let value = (before < most ? before : most) + one;
    let low = list.length < count ? -most : value;
    for (let e = 0; e < rows.length && list.length < count; e += 1) {
      const p = entries[e]!;
      if (this.s[rows[e]!] !== p * p) continue;
      // the last entry that meets this row: it is b / p; 0 is the closing, which fails by itself if b is not 0
      const b = this.b[rows[e]!]!;
      const only = b % p === zero && b !== zero ? b / p : value;
      low = only < value && only >= low ? only : value;
      if (low < value) value = low + one;
      break;
    }
    const frame = this.frames[this.depth];
    if (frame === undefined) this.frames.push({ column, rest, value, low, stands: 'nothing' });
    else Object.assign(frame, { column, rest, value, low, stands: 'nothing' });
  }

  /** Gives one copy the frame's value; answers whether the cuts allow it. */
  private put(frame: Frame, rest: Int): boolean {
    const c = this.order[frame.column]!;
    const { rows, entries } = this.node.columns[c]!;
    let possible = true;
    for (let e = 0; e < rows.length; e += 1) {
      const i = rows[e]!;
      const p = entries[e]!;
      const now = this.b[i]! - p * frame.value;
      this.meet(i, now);
      this.s[i]! -= p * p;
      if (now * now > rest * this.s[i]!) possible = false;
    }
    this.values[c]!.push(frame.value);
    frame.stands = 'value';
    return possible;
  }

  private unput(frame: Frame): void {
    const c = this.order[frame.column]!;
    const { rows, entries } = this.node.columns[c]!;
    for (let e = 0; e < rows.length; e += 1) {
      const i = rows[e]!;
      const p = entries[e]!;
      this.meet(i, this.b[i]! + p * frame.value);
      this.s[i]! += p * p;
    }
    this.values[c]!.pop();
    frame.stands = 'nothing';
  }

  private meet(i: number, now: Int): void {
    const { zero } = this.kind;
    if (this.b[i] === zero) this.unmet += now === zero ? 0 : 1;
    else if (now === zero) this.unmet -= 1;
    this.b[i] = now;
  }

  /** Decides that the other copies stay 0 (or takes that back); answers whether the cuts allow it. */
  private close(frame: Frame, closing: boolean): boolean {
    const c = this.order[frame.column]!;
    const { rows, entries, count } = this.node.columns[c]!;
    const copies = this.kind.of(closing ? this.values[c]!.length - count : count - this.values[c]!.length);
    let possible = true;
    for (let e = 0; e < rows.length; e += 1) {
      const i = rows[e]!;
      this.s[i]! += copies * entries[e]! * entries[e]!;
      if (this.b[i]! * this.b[i]! > frame.rest * this.s[i]!) possible = false;
    }
    frame.stands = closing ? 'closing' : 'nothing';
    return possible;
  }

  /** Where the listing stands, to be opened again there. */
  savedPlace(): string[][] {
    const frames = this.frames
      .slice(0, this.depth + 1)
      .map(({ value, stands }) => [stands === 'nothing' ? 'n' : stands === 'value' ? 'v' : 'c', String(value)]);
    return this.onZeros ? [...frames, this.parts.place()] : frames;
  }

  reopen(node: SparseNode, place: readonly (readonly string[])[]): void {
    this.open(node);
    for (const [no, step] of place.entries()) {
      if (this.onZeros) {
        this.parts.reopen(this.restAt(no), this.node.zeros, step);
        return;
      }
      const frame = this.frames[no]!;
      frame.value = this.kind.fromBig(BigInt(step[1]!));
      if (step[0] === 'n') continue;
      const closing = step[0] === 'c';
      const rest = closing ? frame.rest : frame.rest - frame.value * frame.value;
      if (closing) this.close(frame, true);
      else this.put(frame, rest);
      // below the last decision nothing was open, or it was left already
      if (no < place.length - 1) this.goOn(frame.column + (closing ? 1 : 0), rest);
    }
    this.onZeros = false;
  }

  /** What is left of the norm after the first `frames` decisions. */
  private restAt(frames: number): Int {
    const last = this.frames[frames - 1];
    if (last === undefined) return this.norm;
    return last.stands === 'value' ? last.rest - last.value * last.value : last.rest;
  }
}

/**
 * Which columns to fill first: those that finish a row soonest. Rows that have to be met count first; of them, and then
 * of all, the one with the fewest copies left is finished next.
 */
function fillingOrder(node: SparseNode, zero: Int, inner: readonly Int[]): number[] {
  const { columns } = node;
  const left = new Array<number>(inner.length).fill(0);
  const users: number[][] = inner.map(() => []);
  columns.forEach(({ rows, count }, c) => {
    for (const i of rows) {
      left[i]! += count;
      users[i]!.push(c);
    }
  });
  const taken = new Uint8Array(columns.length);
  const touched = new Uint8Array(inner.length);
  const order: number[] = [];
  let near: number[] = [];
  for (let i = inner.length - 1; i >= 0; i -= 1) {
    if (inner[i] === zero) continue;
    touched[i] = 1;
    near.push(i);
  }
  let far = inner.length - 1;
  while (order.length < columns.length) {
    if (near.length === 0) {
      while (touched[far] === 1) far -= 1;
      touched[far] = 1;
      near = [far];
    }
    let best = 0;
    for (let k = 1; k < Math.min(near.length, 64); k += 1) if (left[near[k]!]! < left[near[best]!]!) best = k;
    const row = near[best]!;
    near[best] = near[near.length - 1]!;
    near.pop();
    for (const c of users[row]!) {
      if (taken[c] === 1) continue;
      taken[c] = 1;
      order.push(c);
      for (const i of columns[c]!.rows) {
        left[i]! -= columns[c]!.count;
        if (touched[i] === 1) continue;
        touched[i] = 1;
        near.push(i);
      }
    }
  }
  return order;
}
