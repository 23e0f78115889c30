/**
 * The children of one node when norms are too big for exact doubles: the same rule and the same order as `listing.ts`,
 * in bigint, plainly. Slow and right: huge entries may take long, they must not be answered wrongly.
 */
import { floorDivide, integerSqrt } from '@palmette/exact';
import type { FoundOrbit } from './found.ts';
import { LISTED, type Listed, type ListingState } from './listing.ts';

interface BigClass {
  readonly mult: number;
  /** Entries by depth, zeros left out. */
  readonly entries: readonly (readonly [number, bigint])[];
}

/** One open slot: a column of a class, or a zero column, with the values still to be tried. */
interface Slot {
  /** Class number, or −1 for a zero column. */
  readonly c: number;
  value: bigint;
  readonly low: bigint;
}

export class BigListing {
  steps = 0;
  private classes: BigClass[] = [];
  private zeros = 0;
  private depth = 0;
  private rest = 0n;
  private b: bigint[] = [];
  private s: bigint[] = [];
  /** Class of each slot in filling order. */
  private slotClass: number[] = [];
  private filled: Slot[] = [];
  private stand: 'fresh' | 'try' | 'back' = 'fresh';

  reset(zeros: number): void {
    this.classes = [];
    this.zeros = zeros;
  }

  begin(depth: number, norm: bigint, target: readonly bigint[], norms: readonly bigint[]): void {
    this.depth = depth;
    this.rest = norm;
    this.b = target.slice(0, depth);
    this.s = norms.slice(0, depth);
    this.slotClass = this.classes.flatMap((c, i) => new Array<number>(c.mult).fill(i));
    this.filled = [];
    this.stand = 'fresh';
  }

  next(limit: number): Listed {
    const last = this.steps + limit;
    for (;;) {
      if (this.steps >= last) return LISTED.paused;
      this.steps += 1;
      if (this.stand === 'fresh') {
        if (this.rest === 0n) {
          this.stand = 'back';
          if (this.canEndHere()) return LISTED.found;
        } else this.stand = this.open() ? 'try' : 'back';
      } else if (this.stand === 'back') {
        const top = this.filled.at(-1);
        if (top === undefined) return LISTED.done;
        this.apply(top, -1n);
        this.stand = 'try';
      } else this.tryNext();
    }
  }

  /** Where it stands; zero columns are slots like others here. */
  state(): ListingState {
    const filled = this.stand === 'try' ? this.filled.slice(0, -1) : this.filled;
    return {
      filled: filled.length,
      nonzero: filled.flatMap((slot, i) => (slot.value === 0n ? [] : [[i, slot.value.toString()] as const])),
      trying: this.stand === 'try' ? this.filled.at(-1)!.value.toString() : null,
      squares: this.stand === 'back' ? [] : null,
    };
  }

  restore(state: ListingState): void {
    const values = new Map(state.nonzero);
    for (let slot = 0; slot < state.filled; slot += 1) {
      this.open();
      this.filled.at(-1)!.value = BigInt(values.get(slot) ?? 0);
      this.apply(this.filled.at(-1)!, 1n);
    }
    if (state.trying !== null) {
      this.open();
      this.filled.at(-1)!.value = BigInt(state.trying);
      this.stand = 'try';
    } else this.stand = state.squares === null ? 'fresh' : 'back';
  }

  private canEndHere(): boolean {
    const top = this.filled.at(-1);
    const next = this.slotClass[this.filled.length];
    return this.b.every((x) => x === 0n) && !(top !== undefined && top.c >= 0 && next === top.c && top.value < 0n);
  }

  /** Opens the next slot with its value one above the first to try. False if there is none. */
  private open(): boolean {
    const at = this.filled.length;
    const top = this.filled.at(-1);
    const root = integerSqrt(this.rest);
    if (at < this.slotClass.length) {
      const c = this.slotClass[at]!;
      const high = top !== undefined && top.c === c && top.value < root ? top.value : root;
      const range = this.narrow(c, -root, high);
      this.filled.push({ c, value: range.high + 1n, low: range.low });
      return true;
    }
    const left = BigInt(this.zeros - (at - this.slotClass.length));
    if (left <= 0n || this.b.some((x) => x !== 0n)) return false;
    const high = top !== undefined && top.c < 0 && top.value < root ? top.value : root;
    // the largest of at most `left` squares is at least rest / left
    this.filled.push({ c: -1, value: high + 1n, low: ceilSqrt((this.rest + left - 1n) / left) });
    return true;
  }

  /** Cauchy–Schwarz as an interval of values (see `listing.ts`), rounded outwards. */
  private narrow(c: number, low: bigint, high: bigint): { low: bigint; high: bigint } {
    let range = { low, high };
    for (const [i, p] of this.classes[c]!.entries) {
      const whole = this.s[i]!;
      const inside = this.rest * whole - this.b[i]! * this.b[i]!;
      if (inside < 0n) return { low: 1n, high: 0n };
      const spread = integerSqrt((whole - p * p) * inside) + 1n;
      const top = floorDivide(this.b[i]! * p + spread, whole);
      const bottom = -floorDivide(spread - this.b[i]! * p, whole);
      range = { low: bottom > range.low ? bottom : range.low, high: top < range.high ? top : range.high };
    }
    return range;
  }

  /** Tries the next smaller value of the top slot; drops the slot if there is none. */
  private tryNext(): void {
    const top = this.filled.at(-1)!;
    top.value -= 1n;
    if (top.value < top.low) {
      this.filled.pop();
      this.stand = 'back';
      return;
    }
    this.apply(top, 1n);
    if (this.mayStand(top)) this.stand = 'fresh';
    else this.apply(top, -1n);
  }

  private apply(slot: Slot, sign: bigint): void {
    this.rest -= sign * slot.value * slot.value;
    if (slot.c < 0) return;
    for (const [i, p] of this.classes[slot.c]!.entries) {
      this.b[i]! -= sign * p * slot.value;
      this.s[i]! -= sign * p * p;
    }
  }

  private mayStand(slot: Slot): boolean {
    if (this.rest < 0n) return false;
    return (
      slot.c < 0 || this.classes[slot.c]!.entries.every(([i]) => this.b[i]! * this.b[i]! <= this.rest * this.s[i]!)
    );
  }

  writeChild(into: BigListing): void {
    into.classes = this.childClasses();
    into.zeros = this.zeros - this.filled.filter((s) => s.c < 0).length;
  }

  private childClasses(): BigClass[] {
    const out: { mult: number; entries: (readonly [number, bigint])[] }[] = [];
    let before: { c: number; value: bigint } | null = null;
    const take = (c: number, value: bigint) => {
      if (before !== null && before.c === c && before.value === value) {
        out.at(-1)!.mult += 1;
        return;
      }
      const entries = c < 0 ? [] : [...this.classes[c]!.entries];
      if (value !== 0n) entries.push([this.depth, value]);
      out.push({ mult: 1, entries });
      before = { c, value };
    };
    this.slotClass.forEach((c, at) => take(c, this.filled[at]?.value ?? 0n));
    this.filled.slice(this.slotClass.length).forEach((slot) => take(-1, slot.value));
    return out;
  }

  /** The child as a finished embedding. */
  orbit(order: readonly number[]): FoundOrbit {
    const columns = this.childClasses().map(({ mult, entries }) => {
      const column: (number | string)[] = new Array<number>(order.length).fill(0);
      for (const [depth, value] of entries) {
        const smallValue = Number(value);
        column[order[depth]!] = Number.isSafeInteger(smallValue) ? smallValue : value.toString();
      }
      return { entries: column, count: mult };
    });
    return { columns, zeros: this.zeros - this.filled.filter((s) => s.c < 0).length };
  }

  get bytes(): number {
    return 64 * (this.slotClass.length + this.classes.reduce((sum, c) => sum + c.entries.length, 0));
  }
}

function ceilSqrt(a: bigint): bigint {
  const s = integerSqrt(a);
  return s * s === a ? s : s + 1n;
}
