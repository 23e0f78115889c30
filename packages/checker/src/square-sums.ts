/**
 * All ways to write r as at most `slots` squares of positive integers, descending.
 *
 * * The largest of at most k squares of r is at least r / k.
 * * With four slots or fewer and 8 | r all are even: squares are 0, 1, 4 mod 8, so one, two or three odd ones leave a sum
 *   that is 1, 2 or 3 mod 4, and four odd ones alone give 4 mod 8. Then r / 4 is written and the answers are doubled.
 * * Two slots: r minus the first square has to be a square.
 */
import type { Int, Kind, Tick } from './list-children.ts';

interface Level {
  rest: Int;
  scale: Int;
  x: Int;
}

export function* squareSums(kind: Kind, r: Int, slots: number, tick: Tick): Generator<readonly Int[]> {
  const { zero, one } = kind;
  const [eight, four] = [kind.of(8), kind.of(4)];
  const open = (rest: Int, used: number, scale: Int, bound: Int | undefined): Level => {
    let left = rest;
    let k = scale;
    let top = bound;
    while (slots - used <= 4 && left !== zero && left % eight === zero) {
      left /= four;
      k += k;
      if (top !== undefined) top = kind.half(top);
    }
    const root = kind.root(left);
    return { rest: left, scale: k, x: (top !== undefined && top < root ? top : root) + one };
  };
  const stack: Level[] = [open(r, 0, one, undefined)];
  while (stack.length > 0) {
    const top = stack[stack.length - 1]!;
    if (top.rest === zero) {
      stack.pop();
      yield stack.map((level) => level.x * level.scale);
      continue;
    }
    tick();
    top.x -= one;
    const free = slots - (stack.length - 1);
    if (free === 0 || top.x <= zero || kind.of(free) * top.x * top.x < top.rest) {
      stack.pop();
      continue;
    }
    const rest = top.rest - top.x * top.x;
    if (free === 1 && rest !== zero) continue;
    if (free === 2) {
      const root = kind.root(rest);
      if (root * root !== rest) continue;
    }
    stack.push(open(rest, stack.length, top.scale, top.x));
  }
}
