/**
 * All ways to write r as at most `slots` squares of positive integers, descending, one after the other.
 *
 * * The largest of at most k squares of r is at least r / k.
 * * With four slots or fewer and 8 | r all are even: squares are 0, 1, 4 mod 8, so one, two or three odd ones leave a sum
 *   that is 1, 2 or 3 mod 4, and four odd ones alone give 4 mod 8. Then r / 4 is written and the answers are doubled.
 * * With two slots left, what the first leaves has to be a square.
 *
 * As doubles it is exact for r < 2^53: only squares up to r and multiples compared with r are formed.
 */
import type { Int, Kind } from './int-kinds.ts';
import { END, FOUND, PAUSED, type Step, type Steps } from './steps.ts';

export class SquareParts {
  /** How many parts stand. */
  length = 0;
  private slots = 0;
  private level = 0;
  private shown = false;
  private readonly rest: Int[] = [];
  private readonly scale: Int[] = [];
  private readonly value: Int[] = [];
  private readonly four: Int;
  private readonly eight: Int;

  constructor(private readonly kind: Kind) {
    this.four = kind.of(4);
    this.eight = kind.of(8);
  }

  open(r: Int, slots: number): void {
    this.slots = slots;
    this.level = 0;
    this.length = 0;
    this.shown = false;
    this.enter(0, r, this.kind.one, r);
  }

  /** Part i of what stands. */
  part(i: number): Int {
    return this.value[i]! * this.scale[i]!;
  }

  /** Where it stands, as decimal strings: to be opened again there. */
  place(): string[] {
    return [this.shown ? '1' : '0', ...this.value.slice(0, this.level + 1).map(String)];
  }

  reopen(r: Int, slots: number, [shown, ...values]: readonly string[]): void {
    this.open(r, slots);
    values.forEach((text, i) => {
      if (i > 0) this.descend(i);
      this.value[i] = this.kind.fromBig(BigInt(text));
    });
    this.level = values.length - 1;
    this.length = this.level;
    this.shown = shown === '1';
  }

  next(steps: Steps): Step {
    const { zero, one, of, root } = this.kind;
    for (;;) {
      const i = this.level;
      const rest = this.rest[i]!;
      if (rest === zero) {
        this.shown = !this.shown;
        if (this.shown) {
          this.length = i;
          return FOUND;
        }
        if (i === 0) return END;
        this.level -= 1;
        continue;
      }
      if (steps.left <= 0) return PAUSED;
      steps.left -= 1;
      const free = this.slots - i;
      const value = this.value[i]! - one;
      this.value[i] = value;
      if (free === 0 || value <= zero || of(free) * value * value < rest) {
        if (i === 0) return END;
        this.level -= 1;
        continue;
      }
      const left = rest - value * value;
      if (free === 1 && left !== zero) continue;
      if (free === 2) {
        const last = root(left);
        if (last * last !== left) continue;
      }
      this.level += 1;
      this.descend(i + 1);
    }
  }

  /** Opens level i below what stands at level i − 1. */
  private descend(i: number): void {
    const value = this.value[i - 1]!;
    this.enter(i, this.rest[i - 1]! - value * value, this.scale[i - 1]!, value);
  }

  private enter(i: number, r: Int, scale: Int, bound: Int): void {
    const { zero, one, root, half } = this.kind;
    let [rest, k, top] = [r, scale, bound];
    while (this.slots - i <= 4 && rest !== zero && rest % this.eight === zero) {
      rest /= this.four;
      k += k;
      top = half(top);
    }
    const most = root(rest);
    this.rest[i] = rest;
    this.scale[i] = k;
    this.value[i] = (top < most ? top : most) + one;
  }
}
