/**
 * The tree of columns (FORMAT.md; Plesken, Linear Algebra Appl. 226–228 (1995)): multisets of admissible columns c with Σ c·cᵀ = W.
 * The residual R = W − Σ s·sᵀ of the columns chosen so far stays positive semidefinite, and a candidate c is kept while R − c·cᵀ is.
 *
 * In integers: e is d at the root. With F(c) the determinant of R − c·cᵀ in the units of e, and T its bilinear form, choosing a gives
 *   F'(c) = (F(a)·F(c) − T(a, c)²) / e,   T'(b, c) = (F(a)·T(b, c) + T(a, b)·T(a, c)) / e,   e' = F(a)
 * if F(a) > 0 (Sylvester's identity), and R − c·cᵀ is positive semidefinite iff F(c) ≥ 0. If F(a) = 0 the rank of R falls by one: c must have T(a, c) = 0, the
 * rest stays. At least as many columns are needed as the rank of R; where no more are left, only those with F(c) = 0 are possible.
 */
import type { AdmissibleColumns } from './admissible-columns.ts';
import { apply, dot, roundedQuotient, type DualForm } from './dual-form.ts';
import { allPlaces, emptyLevel, VectorLadder, type VectorLevel } from './vector-ladder.ts';

interface ColumnsLevel extends VectorLevel {
  /** e, the rank of R, and how many columns may still be chosen. */
  unit: number;
  rankLeft: number;
  columnsLeft: number;
  /** F of each candidate, by place in `candidates`. */
  gaps: Float64Array;
  /** T(a, c) by place in the list, a the column chosen at this level. */
  products: Float64Array | null;
  /** F(a) of it. */
  gap: number;
}

export class ColumnsLadder extends VectorLadder<ColumnsLevel> {
  private readonly image: Float64Array;

  /** @param form direct @param dimension the most columns; zeros of an orbit are counted from it */
  constructor(
    private readonly form: DualForm,
    private readonly columns: AdmissibleColumns,
    dimension: number,
  ) {
    super(form.rank, dimension);
    this.image = new Float64Array(form.rank);
    const level = this.level(0);
    level.entries = columns.entries;
    level.count = columns.count;
    level.candidates = allPlaces(columns.count);
    level.gaps = Float64Array.from(columns.gaps);
    level.unit = Number(form.determinant);
    level.rankLeft = form.rank;
    level.columnsLeft = dimension;
    for (let i = 0; i < form.rank; i += 1) level.rest[i] = Number(form.gram[i]![i]!);
  }

  protected newLevel(): ColumnsLevel {
    return {
      ...emptyLevel(this.rank),
      unit: 1,
      rankLeft: 0,
      columnsLeft: 0,
      gaps: new Float64Array(16),
      products: null,
      gap: 0,
    };
  }

  protected branchOn(level: ColumnsLevel): void {
    if (level.rankLeft <= level.columnsLeft) this.branchOnFewest(level, false);
  }

  protected completes(level: ColumnsLevel, chosen: number): boolean {
    for (let i = 0, at = chosen * this.rank; i < this.rank; i += 1) {
      const x = level.entries[at + i]!;
      if (level.rest[i] !== x * x) return false;
    }
    return true;
  }

  protected repeated(): boolean {
    return false;
  }

  protected writeChild(from: ColumnsLevel, to: ColumnsLevel, chosen: number): void {
    const gap = from.gaps[from.branch[from.at]!]!;
    const depth = this.levels.indexOf(from);
    from.gap = gap;
    from.products ??= new Float64Array(this.columns.count);
    const { products } = from;
    to.unit = gap === 0 ? from.unit : gap;
    to.rankLeft = from.rankLeft - (gap === 0 ? 1 : 0);
    to.columnsLeft = from.columnsLeft - 1;
    if (to.gaps.length < from.count) to.gaps = new Float64Array(from.count);
    const tight = to.columnsLeft === to.rankLeft;
    apply(this.form.direct!, from.entries, chosen * this.rank, this.rank, this.image);
    let count = 0;
    for (let p = 0; p < from.count; p += 1) {
      if (this.isOut(from, p)) continue;
      const candidate = from.candidates[p]!;
      const t = this.product(depth, chosen, candidate);
      if (gap === 0 && t !== 0) continue;
      const left = gap === 0 ? from.gaps[p]! : roundedQuotient(gap, from.gaps[p]!, -t, t, from.unit);
      if (left < 0 || (tight && left !== 0)) continue;
      products[candidate] = t;
      to.candidates[count] = candidate;
      to.gaps[count] = left;
      count += 1;
    }
    this.steps += Math.floor((count * depth) / 4);
    to.count = count;
  }

  /** T(a, c) at a depth, from T at the root by the columns chosen on the way; `image` is adj W·a. */
  private product(depth: number, a: number, c: number): number {
    let t = dot(this.image, this.columns.entries, c * this.rank, this.rank);
    for (let k = 0; k < depth; k += 1) {
      const { gap, products, unit } = this.levels[k]!;
      if (gap > 0) t = roundedQuotient(gap, t, products![a]!, products![c]!, unit);
    }
    return t;
  }

  override get bytes(): number {
    return this.levels.reduce((sum, l) => sum + 8 * (l.gaps.length + (l.products?.length ?? 0)), super.bytes);
  }
}
