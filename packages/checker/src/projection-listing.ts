/**
 * The children of one node of the tree of rows, each once (FORMAT.md, rule C), by cut P of FORMAT.md, in exact integers.
 *
 * The node has `width` nonzero columns with entries H (k × width) and z zero columns. With P = 1 − Hᵀ G⁻¹ H the integer
 * matrix D_k·P is kept. Columns are decided one after the other; for the decided set T put
 *
 *   E_T = det of the Gram matrix of the rows on the undecided columns = D_k · det P_TT,
 *   F_T = E_T · (what is left of the norm, less the shortest real completion) = the same determinant with the new row in it.
 *
 * Both are integers, 0 ≤ E_T ≤ D_k, and F_∅ = D_{k+1}. Fraction-free elimination of D_k·P with the pivots T gives
 * M_ij = D_k · det P_{T∪i, T∪j}, at most D_k in size because 0 ≤ P ≤ 1; every quotient in it is an integer (Sylvester's
 * identity). If the next pivot is E' > 0, the next entry is x = (c + u) / E with u² ≤ E'·F, and F becomes
 * (E'·F − u²) / E: cut P is F ≥ 0. If the pivot is 0 the entry is forced to be c / E. The centres c are eliminated along:
 * c_i becomes (E'·c_i + M_ip·u) / E. A centre is E times an entry of a vector of norm at most W_kk, so |c| ≤ D_k·√W_kk.
 *
 * The smallest pivot goes first. Where the last free entry has nothing left over for zero columns, u² = E'·F is solved by
 * a square root. Equal columns get descending entries, so every multiset is met once. At the end the left-over norm F / E
 * goes to zero columns as squares.
 */
import { exactStep } from './exact-step.ts';
import { DOUBLES, floorRoot } from './int-kinds.ts';
import type { DepthConstants } from './projection-constants.ts';
import { SquareParts } from './square-parts.ts';
import { END, PAUSED, type Step, type Steps } from './steps.ts';

/** More nonzero columns than this are listed by `sparse-listing.ts`. */
export const MAX_WIDTH = 64;

const RANGE = -1;

export class ProjectionListing {
  width = 0;
  zeros = 0;
  /** The entries of the row that stands, by column. */
  readonly row = new Float64Array(MAX_WIDTH);
  readonly parts = new SquareParts(DOUBLES);
  /** D_k·P: entry i ≥ j at i·MAX_WIDTH + j. */
  private readonly projection: Float64Array;
  /** The first column that is equal to this one, in this node. */
  private readonly leader = new Int32Array(MAX_WIDTH);
  /** D_k·Hᵀ·G⁻¹·b. */
  private readonly centre = new Float64Array(MAX_WIDTH);

  /** The column that is decided at each place, the free place it is or −1, and the place of an equal column before. */
  private readonly column = new Int32Array(MAX_WIDTH);
  private readonly freeNo = new Int32Array(MAX_WIDTH);
  private readonly freeBefore = new Int32Array(MAX_WIDTH);
  private readonly twin = new Int32Array(MAX_WIDTH);
  /** The latest place of a class of columns while places are given. */
  private readonly latest = new Int32Array(MAX_WIDTH);
  private free = 0;
  /** E before each free place; eliminated columns M_ip of each free place. */
  private readonly volumes = new Float64Array(MAX_WIDTH + 1);
  private readonly eliminated: Float64Array;
  private readonly work: Float64Array;
  private readonly open_ = new Int32Array(MAX_WIDTH);

  /** What stands at each place, and at each free place. */
  private readonly value = new Float64Array(MAX_WIDTH);
  /** Of a place with two solutions: how many are still to be tried, and the solutions. `RANGE`: a range down to `low`. */
  private readonly solved = new Int8Array(MAX_WIDTH);
  private readonly solutions = new Float64Array(2 * MAX_WIDTH);
  private readonly low = new Float64Array(MAX_WIDTH);
  private readonly middle = new Float64Array(MAX_WIDTH);
  private readonly shift = new Float64Array(MAX_WIDTH);
  private readonly slack = new Float64Array(MAX_WIDTH + 1);
  private place = 0;
  private state: 'enter' | 'next' | 'zeros' = 'enter';

  constructor(private readonly at: DepthConstants) {
    this.projection = new Float64Array(MAX_WIDTH * MAX_WIDTH);
    this.work = new Float64Array(MAX_WIDTH * MAX_WIDTH);
    this.eliminated = new Float64Array(MAX_WIDTH * MAX_WIDTH);
  }

  /** The root: no nonzero column. */
  openRoot(zeros: number): void {
    this.width = 0;
    this.zeros = zeros;
    this.begin();
  }

  /**
   * The node of the child that stands in `parent`; `rows` are the rows up to this node, by column.
   * D_{k+1}·P' = (D_{k+1}·D_k·P − v·vᵀ) / D_k with v = D_k·P·x; on columns that were zero P is the identity.
   */
  openChild(parent: ProjectionListing, rows: readonly Float64Array[]): void {
    const old = parent.width;
    const width = old + parent.parts.length;
    for (let i = old; i < width; i += 1) parent.row[i] = parent.parts.part(i - old);
    parent.row.fill(0, width);
    this.width = width;
    this.zeros = parent.zeros - parent.parts.length;
    const { volume, nextVolume } = parent.at;
    const v = this.centre;
    for (let i = 0; i < width; i += 1)
      v[i] = i < old ? volume * parent.row[i]! - parent.centre[i]! : volume * parent.row[i]!;
    for (let i = 0; i < width; i += 1) {
      const at = i * MAX_WIDTH;
      for (let j = 0; j <= i; j += 1) {
        const before = i < old ? parent.projection[at + j]! : i === j ? volume : 0;
        this.projection[at + j] = exactStep(nextVolume, before, v[i]!, v[j]!, volume);
      }
      this.leader[i] = leaderOf(parent, i, old);
    }
    const { weights } = this.at;
    this.centre.fill(0, 0, width);
    for (let k = 0; k < weights.length; k += 1) {
      const w = weights[k]!;
      if (w === 0) continue;
      const row = rows[k]!;
      for (let i = 0; i < width; i += 1) this.centre[i]! += w * row[i]!;
    }
    this.begin();
  }

  leaderAt(i: number): number {
    return this.leader[i]!;
  }

  /** Decides the order of columns and eliminates. */
  private begin(): void {
    const { width, work, projection, open_ } = this;
    for (let i = 0; i < width; i += 1) {
      open_[i] = i;
      const at = i * MAX_WIDTH;
      for (let j = 0; j <= i; j += 1) work[at + j] = projection[at + j]!;
    }
    let volume = this.at.volume;
    this.volumes[0] = volume;
    this.latest.fill(-1, 0, width);
    this.free = 0;
    for (let place = 0, left = width; place < width; place += 1, left -= 1) {
      let best = 0;
      let pivot = Infinity;
      for (let a = 0; a < left && pivot > 0; a += 1) {
        const size = work[open_[a]! * (MAX_WIDTH + 1)]!;
        if (size < pivot) {
          pivot = size;
          best = a;
        }
      }
      const p = open_[best]!;
      open_.copyWithin(best, best + 1, left);
      this.column[place] = p;
      this.freeBefore[place] = this.free;
      this.twin[place] = this.latest[this.leader[p]!]!;
      this.latest[this.leader[p]!] = place;
      if (pivot === 0) {
        this.freeNo[place] = -1;
        continue;
      }
      const base = this.free * MAX_WIDTH;
      this.freeNo[place] = this.free;
      this.free += 1;
      this.volumes[this.free] = pivot;
      this.eliminate(p, pivot, volume, left - 1, base);
      volume = pivot;
    }
    this.slack[0] = this.at.nextVolume;
    this.place = 0;
    this.state = 'enter';
  }

  private eliminate(p: number, pivot: number, volume: number, left: number, base: number): void {
    const { work, eliminated, open_ } = this;
    for (let a = 0; a < left; a += 1) {
      const i = open_[a]!;
      eliminated[base + i] = i > p ? work[i * MAX_WIDTH + p]! : work[p * MAX_WIDTH + i]!;
    }
    for (let a = 0; a < left; a += 1) {
      const i = open_[a]!;
      const x = eliminated[base + i]!;
      const at = i * MAX_WIDTH;
      for (let b = 0; b <= a; b += 1) {
        const j = open_[b]!;
        work[at + j] = exactStep(pivot, work[at + j]!, x, eliminated[base + j]!, volume);
      }
    }
  }

  next(steps: Steps): Step {
    for (;;) {
      if (this.state === 'zeros') {
        const answer = this.parts.next(steps);
        if (answer !== END) return answer;
        this.place = this.width;
        if (!this.back()) return END;
        continue;
      }
      if (steps.left <= 0) return PAUSED;
      steps.left -= 1;
      if (this.state === 'next') {
        if (!this.tryNext() && !this.back()) return END;
        continue;
      }
      if (this.place === this.width) {
        const rest = this.slack[this.free]! / this.volumes[this.free]!;
        if (rest === 0 || this.zeros > 0) {
          this.openZeros(rest);
        } else if (!this.back()) return END;
        continue;
      }
      if (!this.enter() && !this.back()) return END;
    }
  }

  private openZeros(rest: number): void {
    for (let q = 0; q < this.width; q += 1) this.row[this.column[q]!] = this.value[q]!;
    this.parts.open(rest, this.zeros);
    this.state = 'zeros';
  }

  /** Where the listing stands: its state, the values that stand in the order of places, and the zero columns' place. */
  savedPlace(): string[][] {
    if (this.state === 'enter') return [['enter'], this.valuesBefore(this.place)];
    if (this.state === 'next') return [['next'], this.valuesBefore(this.place + 1)];
    return [['zeros'], this.valuesBefore(this.width), this.parts.place()];
  }

  private valuesBefore(place: number): string[] {
    return Array.from(this.value.subarray(0, place), String);
  }

  /** Goes to a saved place of this node. */
  reopen(saved: readonly (readonly string[])[]): void {
    const [head, values, zeros] = saved;
    const state = head![0];
    this.begin();
    for (const [q, text] of values!.entries()) {
      // values are accepted in descending order, so the one that stood comes again
      for (let found = this.enter(); this.value[q] !== Number(text); found = this.tryNext()) {
        if (!found) throw new RangeError('a place without a row');
        this.place = q;
      }
      this.place = q + 1;
    }
    this.state = state === 'next' ? 'next' : 'enter';
    if (state === 'next') this.place -= 1;
    if (state !== 'zeros') return;
    const rest = this.slack[this.free]! / this.volumes[this.free]!;
    this.openZeros(rest);
    this.parts.reopen(rest, this.zeros, zeros!);
  }

  /** Goes back to the last free place before; false if there is none. */
  private back(): boolean {
    do this.place -= 1;
    while (this.place >= 0 && this.freeNo[this.place]! < 0);
    this.state = 'next';
    return this.place >= 0;
  }

  /** At a place that is decided now: a forced entry is put in, a free one gets its range. False if nothing is possible. */
  private enter(): boolean {
    const { place, volumes, eliminated, shift, value } = this;
    const column = this.column[place]!;
    const free = this.freeBefore[place]!;
    let c = this.centre[column]!;
    for (let s = 0; s < free; s += 1)
      c = exactStep(volumes[s + 1]!, c, -eliminated[s * MAX_WIDTH + column]!, shift[s]!, volumes[s]!);
    const volume = volumes[free]!;
    const twin = this.twin[place]!;
    const most = twin < 0 ? Infinity : value[twin]!;
    if (this.freeNo[place]! < 0) {
      if (c % volume !== 0 || c / volume > most) return false;
      value[place] = c / volume;
      this.place += 1;
      return true;
    }
    const reach = volumes[free + 1]! * this.slack[free]!;
    this.middle[place] = c;
    if (this.zeros === 0 && free === this.free - 1 && reach <= Number.MAX_SAFE_INTEGER) {
      const root = floorRoot(reach);
      if (root * root !== reach) return false;
      // u² = E'·F has two solutions at most; the greater is tried first
      this.solved[place] = 0;
      for (const end of [(c - root) / volume, (c + root) / volume])
        if (Number.isInteger(end) && end <= most && (root > 0 || this.solved[place] === 0))
          this.solutions[2 * place + this.solved[place]++] = end;
      return this.tryNext();
    }
    this.solved[place] = RANGE;
    const root = Math.floor(Math.sqrt(reach)) + 1;
    value[place] = Math.min(Math.floor((c + root) / volume), most) + 1;
    this.low[place] = Math.ceil((c - root) / volume);
    return this.tryNext();
  }

  /** The next value at a free place; false if there is none. */
  private tryNext(): boolean {
    const { place, value, volumes, slack } = this;
    const free = this.freeNo[place]!;
    const volume = volumes[free]!;
    const c = this.middle[place]!;
    if (this.solved[place] !== RANGE) {
      if (this.solved[place] === 0) return false;
      value[place] = this.solutions[2 * place + --this.solved[place]!]!;
      this.shift[free] = volume * value[place]! - c;
      slack[free + 1] = 0;
      return this.goOn();
    }
    for (;;) {
      const v = value[place]! - 1;
      if (v < this.low[place]!) return false;
      value[place] = v;
      const u = volume * v - c;
      const rest = exactStep(volumes[free + 1]!, slack[free]!, u, u, volume);
      if (rest >= 0) {
        this.shift[free] = u;
        slack[free + 1] = rest;
        return this.goOn();
      }
      if (u < 0) return false;
    }
  }

  private goOn(): true {
    this.place += 1;
    this.state = 'enter';
    return true;
  }
}

function leaderOf(parent: ProjectionListing, i: number, old: number): number {
  const from = i < old ? parent.leaderAt(i) : old;
  for (let j = from; j < i; j += 1)
    if (parent.row[j] === parent.row[i] && (j >= old || parent.leaderAt(j) === from)) return j;
  return i;
}
