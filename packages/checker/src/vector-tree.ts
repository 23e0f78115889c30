/**
 * What a tree of frames or of columns lists, found again in the checker's own way. FORMAT.md, section 7.
 *
 * A state is what is left of W: columns may still be taken from a list, and R = W − Σ s·sᵀ over the columns taken. R is kept through its dual:
 * e, and for each candidate c the integer F(c) with F(c)/e = 1 − cᵀR⁻¹c (on the image of R), and products T(a, c) with T(a, c)/e = aᵀR⁻¹c. Taking a:
 *   F(a) > 0:  e' = F(a), F'(c) = (F(a)·F(c) − T(a, c)²)/e, T'(b, c) = (F(a)·T(b, c) + T(a, b)·T(a, c))/e  (Sherman–Morrison, times e');
 *   F(a) = 0:  aᵀR⁻¹a = 1, the rank of R falls by one; a candidate must have T(a, c) = 0, and for those nothing changes.
 * R − c·cᵀ is positive semidefinite iff F(c) ≥ 0. With `free` columns left and R of rank q there are three cases:
 *   free < q: nothing (each column takes at most one from the rank);
 *   free = q: every column has F(c) = 0, and they are orthogonal (T = 0): F0;
 *   free = q + 1: pairs (c, y), y² = F(c), orthogonal if T(c, c') + y·y' = 0: F1 for the reduced form of R. *In the units of e:* the y of F1 is √(det R)·(a unit vector
 *     orthogonal to the rows) up to sign, and √(F(c)) is the same vector times √(e / det R), so signs and orthogonality agree; F(c) is then a square, because it
 *     is the square of a rational number and an integer.
 * An orbit is a multiset: the columns that cover one row of R are taken in the order of the list, none before the one taken last for that row.
 */
import type { DualColumns } from './dual-columns.ts';
import type { DualForm } from './dual-form.ts';
import type { Int } from './int-kinds.ts';

/** A node: what may be taken, and what R has left on its diagonal. `taken` are places in the list. */
export interface State {
  readonly e: Int;
  readonly rank: number;
  /** Columns that may still be taken; Infinity where any number may. */
  readonly free: number;
  readonly rest: readonly number[];
  /** Candidates by place in the list, with F. */
  readonly candidates: Int32Array;
  readonly gaps: readonly Int[];
  /** The steps with F(a) > 0 on the way: e before, F(a), and T(a, ·) by place. */
  readonly steps: readonly {
    readonly e: Int;
    readonly gap: Int;
    readonly products: ReadonlyMap<number, Int> | Int[];
  }[];
  /** free = q + 1: vectors with y; then candidates are places in it. */
  readonly pairs: Pairs | null;
  readonly taken: readonly number[];
}

export interface Pairs {
  readonly place: Int32Array;
  readonly y: readonly Int[];
}

/** The children of a state: which candidate is taken, by its place in `candidates`. */
export interface Branches {
  readonly row: number;
  readonly at: readonly number[];
}

export class VectorTree {
  constructor(
    private readonly form: DualForm,
    private readonly columns: DualColumns,
    private readonly dimension: number | null,
  ) {}

  root(): State {
    const { form, columns } = this;
    return this.settle({
      e: form.determinant,
      rank: form.rank,
      free: this.dimension ?? Infinity,
      rest: form.gram.map((row, i) => Number(row[i]!)),
      candidates: Int32Array.from({ length: columns.count }, (_, k) => k),
      gaps: columns.gaps,
      steps: [],
      pairs: null,
      taken: [],
    });
  }

  isLeaf(state: State): boolean {
    return state.rest.every((x) => x === 0) && (state.pairs === null || state.free === 0);
  }

  /** The row of R with fewest candidates; no children where a row cannot be covered. */
  branches(state: State): Branches {
    const { rank: width } = this.form;
    const { rest, candidates } = state;
    const none: Branches = { row: 0, at: [] };
    if (state.pairs === null ? state.free < state.rank : candidates.length < state.free) return none;
    const meets = new Array<number>(width).fill(0);
    for (const c of candidates) {
      const at = this.column(state, c) * width;
      if (at < 0) continue;
      for (let i = 0; i < width; i += 1) if (this.columns.entries[at + i] !== 0) meets[i]! += 1;
    }
    let row = -1;
    for (let i = 0; i < width; i += 1) {
      if (rest[i] === 0) continue;
      if (meets[i] === 0) return none;
      if (row < 0 || meets[i]! < meets[row]!) row = i;
    }
    const at: number[] = [];
    // R is 0 and a pair (0, y) is still to come
    if (row < 0) candidates.forEach((_, i) => at.push(i));
    else
      candidates.forEach((c, i) => {
        if (this.entry(state, c, row) !== 0) at.push(i);
      });
    return { row, at };
  }

  child(state: State, { row }: Branches, at: number): State {
    return state.pairs === null ? this.take(state, row, at) : this.takePair(state, state.pairs, row, at);
  }

  /** Place in the list of columns; −1 for the column 0. */
  private column(state: State, candidate: number): number {
    return state.pairs === null ? candidate : state.pairs.place[candidate]!;
  }

  private entry(state: State, candidate: number, row: number): number {
    const k = this.column(state, candidate);
    return row < 0 || k < 0 ? 0 : this.columns.entries[k * this.form.rank + row]!;
  }

  private restAfter(state: State, k: number): number[] {
    const { rank } = this.form;
    return state.rest.map((x, i) => (k < 0 ? x : x - this.columns.entries[k * rank + i]! ** 2));
  }

  private take(state: State, row: number, at: number): State {
    const { form } = this;
    const { zero } = form.kind;
    const a = state.candidates[at]!;
    const gap = state.gaps[at]!;
    const product = this.productWith(state, a);
    const unit = gap === zero;
    // one column more than the rank will be left: only squares can be pairs
    const pairing = state.free - 1 === state.rank - (unit ? 1 : 0) + 1;
    const keep = new Int32Array(state.candidates.length);
    const gaps: Int[] = [];
    const products: Int[] = [];
    state.candidates.forEach((c, i) => {
      if (i < at && this.entry(state, c, row) !== 0) return;
      const t = product(c);
      if (unit && t !== zero) return;
      const left = unit ? state.gaps[i]! : form.quotient(gap, state.gaps[i]!, t, t, state.e);
      if (left < zero || (pairing && form.squareRoot(left) < zero)) return;
      keep[gaps.length] = c;
      gaps.push(left);
      products.push(t);
    });
    const candidates = keep.slice(0, gaps.length);
    return this.settle({
      e: unit ? state.e : gap,
      rank: state.rank - (unit ? 1 : 0),
      free: state.free - 1,
      rest: this.restAfter(state, a),
      candidates,
      gaps,
      steps: unit
        ? state.steps
        : [...state.steps, { e: state.e, gap, products: new Map(products.map((t, i) => [candidates[i]!, t])) }],
      pairs: null,
      taken: [...state.taken, a],
    });
  }

  /** Where as many columns are left as R has rank, or one more: F0, F1. */
  private settle(state: State): State {
    const { zero } = this.form.kind;
    if (state.free === state.rank) {
      const at = state.gaps.flatMap((f, i) => (f === zero ? [i] : []));
      return {
        ...state,
        candidates: state.candidates.filter((_, i) => state.gaps[i] === zero),
        gaps: at.map(() => zero),
      };
    }
    if (state.free !== state.rank + 1) return state;
    const place: number[] = [];
    const y: Int[] = [];
    const add = (k: number, gap: Int) => {
      const root = this.form.squareRoot(gap);
      if (root < zero) return;
      place.push(k);
      y.push(root);
      if (root === zero || k < 0) return;
      place.push(k);
      y.push(-root);
    };
    state.candidates.forEach((k, i) => add(k, state.gaps[i]!));
    add(-1, state.e);
    const count = place.length;
    return {
      ...state,
      pairs: { place: Int32Array.from(place), y },
      candidates: Int32Array.from({ length: count }, (_, i) => i),
      gaps: [],
    };
  }

  private takePair(state: State, pairs: Pairs, row: number, at: number): State {
    const { zero } = this.form.kind;
    const chosen = state.candidates[at]!;
    const k = pairs.place[chosen]!;
    const y = pairs.y[chosen]!;
    const product = k < 0 ? () => zero : this.productWith(state, k);
    const candidates = state.candidates.filter((c, i) => {
      if (c === chosen || (i < at && (row < 0 || this.entry(state, c, row) !== 0))) return false;
      const other = pairs.place[c]!;
      return (other < 0 ? zero : product(other)) + y * pairs.y[c]! === zero;
    });
    return {
      ...state,
      rank: state.rank,
      free: state.free - 1,
      rest: this.restAfter(state, k),
      candidates,
      taken: [...state.taken, chosen],
    };
  }

  /** T(a, ·) in the units of the state. */
  private productWith(state: State, a: number): (c: number) => Int {
    const { form, columns } = this;
    const { rank, adjugate, kind } = form;
    const { zero, of } = kind;
    const { entries } = columns;
    const image: Int[] = new Array<Int>(rank).fill(zero);
    for (let j = 0; j < rank; j += 1) {
      const x = entries[a * rank + j]!;
      if (x !== 0) for (let i = 0; i < rank; i += 1) image[i]! += adjugate[j * rank + i]! * of(x);
    }
    const steps = state.steps.map((s) => ({ ...s, own: valueAt(s.products, a) }));
    return (c) => {
      let t = zero;
      for (let i = 0, at = c * rank; i < rank; i += 1, at += 1) {
        const x = entries[at]!;
        if (x !== 0) t += image[i]! * of(x);
      }
      for (const { e, gap, own, products } of steps) t = form.quotient(gap, t, -own, valueAt(products, c), e);
      return t;
    };
  }

  /** Is this leaf the first of an orbit and its mirror image y ↦ −y? */
  counts(state: State): boolean {
    const { pairs } = state;
    if (pairs === null) return true;
    const inPairs = state.taken.slice(state.taken.length - this.pairsTaken(state));
    const mirror = (c: number): number => {
      for (const other of [c - 1, c + 1])
        if (pairs.place[c]! >= 0 && pairs.place[other] === pairs.place[c] && pairs.y[other] === -pairs.y[c]!)
          return other;
      return c;
    };
    const ascending = (a: number, b: number) => a - b;
    const one = [...inPairs].sort(ascending);
    const image = inPairs.map(mirror).sort(ascending);
    const differs = one.findIndex((c, i) => c !== image[i]);
    return differs < 0 || one[differs]! < image[differs]!;
  }

  /** How many of the vectors taken are pairs: as many as there were places when pairs began. */
  private pairsTaken(state: State): number {
    return state.rank + 1 - state.free;
  }
}

function valueAt(products: ReadonlyMap<number, Int> | Int[], k: number): Int {
  return Array.isArray(products) ? products[k]! : products.get(k)!;
}
