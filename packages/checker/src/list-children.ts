/**
 * The children of a node of the tree of rows, each once (FORMAT.md, rule C), in exact integers: as doubles where every
 * norm is below 2^25, so that no product reaches 2^53, as bigint otherwise.
 *
 * Column by column the nonzero values of its copies are chosen, descending (what is not chosen stays 0). R is the norm
 * still to spend, b_i what row i still has to be met by, S_i the squares of row i in copies not yet decided. Cuts: N and
 * CS of FORMAT.md, and nothing else: R ≥ 0 always, b_i² ≤ R·S_i for each row of a column that was decided.
 * At the end every b_i is 0 and R is spread over zero columns as squares.
 */
import { rootOf } from './arithmetic.ts';
import type { Column, Filling, NodeColumns } from './node-columns.ts';

/** Integer operations, once for doubles and once for bigint. */
export interface Ring<T> {
  readonly zero: T;
  readonly one: T;
  of(x: number): T;
  add(a: T, b: T): T;
  sub(a: T, b: T): T;
  mul(a: T, b: T): T;
  less(a: T, b: T): boolean;
  /** Largest s with s² ≤ a. */
  root(a: T): T;
  /** a / 4 if 8 divides a, else null. */
  quarterOfEighth(a: T): T | null;
  /** ⌊a / 2⌋ for a ≥ 0. */
  half(a: T): T;
}

export const doubles: Ring<number> = {
  zero: 0,
  one: 1,
  of: (x) => x,
  add: (a, b) => a + b,
  sub: (a, b) => a - b,
  mul: (a, b) => a * b,
  less: (a, b) => a < b,
  root: (a) => {
    let s = Math.floor(Math.sqrt(a));
    while (s * s > a) s -= 1;
    while ((s + 1) * (s + 1) <= a) s += 1;
    return s;
  },
  quarterOfEighth: (a) => (a % 8 === 0 ? a / 4 : null),
  half: (a) => Math.floor(a / 2),
};

export const bigints: Ring<bigint> = {
  zero: 0n,
  one: 1n,
  of: BigInt,
  add: (a, b) => a + b,
  sub: (a, b) => a - b,
  mul: (a, b) => a * b,
  less: (a, b) => a < b,
  root: rootOf,
  quarterOfEighth: (a) => (a % 8n === 0n ? a / 4n : null),
  half: (a) => a / 2n,
};

/** Counts one unit of work. */
export type Tick = () => void;

/** @param inner inner products of the new row with the rows 0 … depth − 1; @param norms their norms */
export function* listChildren<T extends number | bigint>(
  ring: Ring<T>,
  node: NodeColumns<T>,
  norm: T,
  inner: readonly T[],
  norms: readonly T[],
  tick: Tick,
): Generator<Filling<T>> {
  const { sub, mul, less, zero } = ring;
  const order = fillingOrder(node, zero, inner);
  const b = [...inner];
  const s = [...norms];
  const values: T[][] = node.columns.map(() => []);
  let unmet = b.filter((x) => x !== zero).length;

  /** Takes a copy with value v into the inner products (sign 1) or out of them (sign −1). */
  const put = (column: Column<T>, v: T, sign: T) => {
    for (const [i, p] of column.entries) {
      const before = b[i]!;
      b[i] = sub(before, mul(sign, mul(p, v)));
      if (before === zero && b[i] !== zero) unmet += 1;
      if (before !== zero && b[i] === zero) unmet -= 1;
    }
  };
  /** Takes copies of a column out of the squares still open (sign 1), or puts them back (sign −1). */
  const decide = (column: Column<T>, copies: T, sign: T) => {
    for (const [i, p] of column.entries) s[i] = sub(s[i]!, mul(sign, mul(copies, mul(p, p))));
  };
  const mayGoOn = (column: Column<T>, r: T) => column.entries.every(([i]) => !less(mul(r, s[i]!), mul(b[i]!, b[i]!)));

  // explicit stack: one frame for each value chosen, or for "no more values in this column"
  interface Frame {
    readonly place: number;
    readonly r: T;
    next: T;
    readonly low: T;
    chosen: T | null;
    closed: boolean;
  }
  const minus = sub(zero, ring.one);
  const open = (place: number, r: T): Frame => {
    const column = node.columns[order[place]!]!;
    const list = values[order[place]!]!;
    const high = ring.root(r);
    const before = list.at(-1);
    return {
      place,
      r,
      next: before !== undefined && less(before, high) ? before : high,
      low: list.length < column.count ? sub(zero, high) : ring.one,
      chosen: null,
      closed: false,
    };
  };
  const stack: Frame[] = [];
  if (order.length === 0) {
    if (unmet === 0) for (const onZeros of squareSums(ring, norm, node.zeros, tick)) yield { values, onZeros };
    return;
  }
  stack.push(open(0, norm));
  while (stack.length > 0) {
    const frame = stack.at(-1)!;
    const column = node.columns[order[frame.place]!]!;
    const list = values[order[frame.place]!]!;
    tick();
    if (frame.chosen !== null) {
      put(column, frame.chosen, minus);
      decide(column, ring.one, minus);
      list.pop();
      frame.chosen = null;
    }
    if (frame.closed) {
      // the column had been closed with zeros for its last copies: that was the last choice of this frame
      decide(column, ring.of(column.count - list.length), minus);
      stack.pop();
      continue;
    }
    const full = list.length === column.count;
    if (!full && !less(frame.next, frame.low)) {
      const v = frame.next;
      frame.next = sub(v, ring.one);
      if (v === zero) continue;
      const r = sub(frame.r, mul(v, v));
      if (less(r, zero)) continue;
      put(column, v, ring.one);
      decide(column, ring.one, ring.one);
      list.push(v);
      frame.chosen = v;
      if (mayGoOn(column, r)) stack.push(open(frame.place, r));
      continue;
    }
    // no further value: the remaining copies are 0
    frame.closed = true;
    decide(column, ring.of(column.count - list.length), ring.one);
    if (!mayGoOn(column, frame.r)) continue;
    if (frame.place + 1 < order.length && frame.r !== zero) {
      stack.push(open(frame.place + 1, frame.r));
      continue;
    }
    if (unmet === 0) for (const onZeros of squareSums(ring, frame.r, node.zeros, tick)) yield { values, onZeros };
  }
}

/** Columns that meet a row which has to be met come first, then the youngest columns. */
function fillingOrder<T extends number | bigint>(node: NodeColumns<T>, zero: T, inner: readonly T[]): number[] {
  const wanted = node.columns.map(({ entries }) => entries.reduce((best, [i]) => (inner[i] === zero ? best : i), -1));
  const last = node.columns.map(({ entries }) => entries.at(-1)![0]);
  return node.columns.map((_, c) => c).sort((x, y) => wanted[y]! - wanted[x]! || last[y]! - last[x]! || x - y);
}

/**
 * All ways to write r as at most `slots` squares of positive integers, descending. With four slots or fewer and 8 | r all
 * are even: squares are 0, 1, 4 mod 8, and one to four odd ones give 1 to 4 mod 4 short of 0 mod 8.
 */
export function* squareSums<T extends number | bigint>(
  ring: Ring<T>,
  r: T,
  slots: number,
  tick: Tick,
  most?: T,
): Generator<readonly T[]> {
  interface Level {
    readonly r: T;
    readonly scale: T;
    x: T;
  }
  const level = (rest: T, used: number, scale: T, bound: T | undefined): Level => {
    let left: T = rest;
    let k: T = scale;
    let top: T | undefined = bound;
    const free = slots - used;
    for (
      let quarter = ring.quarterOfEighth(left);
      free <= 4 && left !== ring.zero && quarter !== null;
      quarter = ring.quarterOfEighth(left)
    ) {
      left = quarter;
      k = ring.add(k, k);
      if (top !== undefined) top = ring.half(top);
    }
    const root = ring.root(left);
    return { r: left, scale: k, x: ring.add(top !== undefined && ring.less(top, root) ? top : root, ring.one) };
  };
  const stack: Level[] = [level(r, 0, ring.one, most)];
  while (stack.length > 0) {
    const top = stack.at(-1)!;
    const used = stack.length - 1;
    if (top.r === ring.zero) {
      yield stack.slice(0, -1).map((l) => ring.mul(l.x, l.scale));
      stack.pop();
      continue;
    }
    tick();
    top.x = ring.sub(top.x, ring.one);
    const free = slots - used;
    // x is the largest of at most `free` squares
    if (
      free === 0 ||
      !ring.less(ring.zero, top.x) ||
      ring.less(ring.mul(ring.of(free), ring.mul(top.x, top.x)), top.r)
    ) {
      stack.pop();
      continue;
    }
    const rest = ring.sub(top.r, ring.mul(top.x, top.x));
    if (free === 2) {
      const root = ring.root(rest);
      if (ring.mul(root, root) !== rest) continue;
    }
    stack.push(level(rest, used + 1, top.scale, top.x));
  }
}
