/**
 * The children of a node of the tree of rows, each once (FORMAT.md, rule C), in exact integers.
 *
 * Column by column the nonzero values of its copies are chosen, descending; then the column is closed, its other copies
 * staying 0. R is the norm still to spend, b_i what row i still has to be met by, S_i the squares of row i in copies not
 * decided yet. Cuts: N and CS of FORMAT.md and nothing else: R ≥ 0, and b_i² ≤ R·S_i for each row of a column in which
 * something was decided. At the end every b_i is 0 and R goes to zero columns as squares.
 *
 * The code is written with the operators that doubles and bigint share. `Int` stands for either; all constants come from
 * `Kind`. As doubles it is exact while every norm is below 2^25: no product of two intermediates reaches 2^53.
 */
import type { Filling, NodeColumns } from './node-columns.ts';
import { squareSums } from './square-sums.ts';

/** A double with an integer value, or a bigint: one kind throughout a run. */
export type Int = number;

export interface Kind {
  readonly zero: Int;
  readonly one: Int;
  readonly of: (x: number) => Int;
  /** Largest s with s² ≤ a. */
  readonly root: (a: Int) => Int;
  readonly half: (a: Int) => Int;
}

/** Counts one unit of work. */
export type Tick = () => void;

/** Where columns are filled: a frame for each chosen value, and one for each closing. */
interface Frame {
  place: number;
  rest: Int;
  /** Next value to try, and the last. */
  value: Int;
  low: Int;
  /** What stands: nothing, a value, or the closing of the column. */
  stands: 'nothing' | 'value' | 'closing';
}

/** @param inner inner products of the new row with the rows before it; @param norms their norms */
export function* listChildren(
  kind: Kind,
  node: NodeColumns,
  norm: Int,
  inner: readonly Int[],
  norms: readonly Int[],
  tick: Tick,
): Generator<Filling> {
  const { zero, one } = kind;
  const { columns } = node;
  const order = fillingOrder(node, zero, inner);
  const b = inner.slice();
  const s = norms.slice(0, inner.length);
  const values: Int[][] = columns.map(() => []);
  let unmet = 0;
  for (const x of b) if (x !== zero) unmet += 1;
  if (order.length === 0) {
    if (unmet === 0) for (const onZeros of squareSums(kind, norm, node.zeros, tick)) yield { values, onZeros };
    return;
  }

  const frames: Frame[] = [];
  let depth = -1;
  const open = (place: number, rest: Int) => {
    depth += 1;
    const frame = (frames[depth] ??= { place, rest, value: zero, low: zero, stands: 'nothing' });
    const c = order[place]!;
    const list = values[c]!;
    const root = kind.root(rest);
    const before = list.length > 0 ? list[list.length - 1]! : root;
    frame.place = place;
    frame.rest = rest;
    frame.value = (before < root ? before : root) + one;
    frame.low = list.length < columns[c]!.count ? -root : frame.value;
    frame.stands = 'nothing';
  };
  open(0, norm);
  while (depth >= 0) {
    tick();
    const frame = frames[depth]!;
    const c = order[frame.place]!;
    const { rows, entries, count } = columns[c]!;
    const list = values[c]!;
    if (frame.stands === 'closing') {
      const copies = kind.of(count - list.length);
      for (let e = 0; e < rows.length; e += 1) s[rows[e]!]! += copies * entries[e]! * entries[e]!;
      depth -= 1;
      continue;
    }
    if (frame.stands === 'value') {
      for (let e = 0; e < rows.length; e += 1) {
        const i = rows[e]!;
        const p = entries[e]!;
        const old = b[i]!;
        const now = old + p * frame.value;
        b[i] = now;
        if (old === zero) unmet += 1;
        else if (now === zero) unmet -= 1;
        s[i]! += p * p;
      }
      list.pop();
      frame.stands = 'nothing';
    }
    frame.value -= one;
    if (frame.value === zero) frame.value -= one;
    if (frame.value >= frame.low) {
      const v = frame.value;
      const rest = frame.rest - v * v;
      if (rest < zero) continue;
      let possible = true;
      for (let e = 0; e < rows.length; e += 1) {
        const i = rows[e]!;
        const p = entries[e]!;
        const old = b[i]!;
        const now = old - p * v;
        b[i] = now;
        if (old === zero) unmet += 1;
        else if (now === zero) unmet -= 1;
        s[i]! -= p * p;
        if (now * now > rest * s[i]!) possible = false;
      }
      list.push(v);
      frame.stands = 'value';
      if (possible) open(frame.place, rest);
      continue;
    }
    // no further value: the other copies stay 0
    const copies = kind.of(count - list.length);
    let possible = true;
    for (let e = 0; e < rows.length; e += 1) {
      const i = rows[e]!;
      s[i]! -= copies * entries[e]! * entries[e]!;
      if (b[i]! * b[i]! > frame.rest * s[i]!) possible = false;
    }
    frame.stands = 'closing';
    if (!possible) continue;
    if (frame.place + 1 < order.length && frame.rest !== zero) open(frame.place + 1, frame.rest);
    else if (unmet === 0)
      for (const onZeros of squareSums(kind, frame.rest, node.zeros, tick)) yield { values, onZeros };
  }
}

/**
 * Which columns to fill first: those that finish a row soonest. Rows that have to be met count first; of them, and then
 * of all, the one with the fewest copies left is finished next.
 */
function fillingOrder(node: NodeColumns, zero: Int, inner: readonly Int[]): number[] {
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
