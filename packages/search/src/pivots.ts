/**
 * In which order the columns of a node are filled for the next row, and what each filled column says about the others.
 *
 * Let H be the k × N matrix of the nonzero columns, G = H·Hᵀ, D = det G. A row x with Hx = b differs from the shortest
 * real solution by a vector in the kernel of H, and P = 1 − HᵀG⁻¹H projects on that kernel. Once columns S are filled,
 * the rest has suffix Gram G_S = G − H_S·H_Sᵀ, of determinant e; with g_ab = h_aᵀ·adj(G_S)·h_b the matrix e·1 − g is e
 * times the projection on the kernel of what is left. Filling one more column p gives
 *   e' = e − g_pp,   g'_ab = (e'·g_ab + g_ap·g_pb) / e,
 * exact in integers, since all of these are minors of D·P (Bareiss, Math. Comp. 22 (1968)). So g depends on the class of a
 * column only, and the order does not depend on the values filled in. Only the diagonal is kept up to date; the row of a
 * pivot is brought up to date when it is chosen.
 *
 * e' = 0: the rest of the row forces the column; it is filled at once and changes nothing. Otherwise the column with the
 * smallest e' is filled: it has the fewest values to try. After N − k such columns everything is forced.
 */

/** 1.5·2^52: sums beyond it have no digits after the point. */
const ROUND = 6755399441055744;

/** The nearest integer, for |q| < 2^51. */
export function nearest(q: number): number {
  return q + ROUND - ROUND;
}

export class Pivots {
  /** Steps planned so far: class of each, and whether its value is forced. */
  planned = 0;
  readonly stepClass: Int32Array;
  readonly forced: Uint8Array;
  /** Free steps planned so far; e before the first, after the first, …, and 1/e. */
  free = 0;
  readonly e: Float64Array;
  readonly inverse: Float64Array;
  /** g_ap as it stands before free step f, for class a, at f·cap + a. */
  readonly row: Float64Array;
  /** Classes with an open column: `openCount` of them now, the first `afterFree[f]` of them after free step f. */
  readonly open: Int32Array;
  readonly afterFree: Int32Array;
  openCount = 0;
  /** Multiply-and-adds so far. */
  work = 0;

  private g: Float64Array;
  /** g_aa as it stands now. */
  private readonly diagonal: Float64Array;
  private readonly left: Int32Array;

  /** @param cap most columns a node can have */
  constructor(private readonly cap: number) {
    this.stepClass = new Int32Array(cap);
    this.forced = new Uint8Array(cap);
    this.e = new Float64Array(cap + 1);
    this.inverse = new Float64Array(cap + 1);
    this.row = new Float64Array(cap * cap);
    this.open = new Int32Array(cap);
    this.afterFree = new Int32Array(cap + 1);
    this.diagonal = new Float64Array(cap);
    this.left = new Int32Array(cap);
    this.g = this.diagonal;
  }

  /** @param g lower triangle of the node's matrix, at a·cap + b; @param mult columns in each class */
  begin(minor: number, g: Float64Array, classes: number, mult: Int32Array): void {
    this.planned = 0;
    this.free = 0;
    this.e[0] = minor;
    this.inverse[0] = 1 / minor;
    this.g = g;
    for (let a = 0; a < classes; a += 1) {
      this.left[a] = mult[a]!;
      this.open[a] = a;
      this.diagonal[a] = g[a * this.cap + a]!;
    }
    this.openCount = classes;
  }

  /** Plans one more step. There must be an open column, and fewer than N − k free steps so far. */
  plan(): void {
    const { open, openCount, diagonal, planned, free } = this;
    let at = 0;
    let p = open[0]!;
    let most = diagonal[p]!;
    for (let i = 1; i < openCount; i += 1) {
      const a = open[i]!;
      const weight = diagonal[a]!;
      if (weight > most || (weight === most && a < p)) {
        most = weight;
        at = i;
        p = a;
      }
    }
    this.stepClass[planned] = p;
    this.planned += 1;
    this.left[p]! -= 1;
    if (this.left[p] === 0) {
      this.openCount -= 1;
      open[at] = open[this.openCount]!;
      open[this.openCount] = p;
    }
    const e = this.e[free]!;
    this.forced[planned] = most === e ? 1 : 0;
    if (most === e) return;
    this.afterFree[free] = this.openCount;
    this.e[free + 1] = e - most;
    this.inverse[free + 1] = 1 / (e - most);
    this.writeRow(p, free);
    this.free += 1;
  }

  /** The row of pivot p before free step f, from the node's matrix by the steps before it; then the new diagonal. */
  private writeRow(p: number, f: number): void {
    const { cap, open, openCount, g, row, e, inverse, diagonal } = this;
    const base = f * cap;
    for (let i = 0; i < openCount; i += 1) {
      const a = open[i]!;
      row[base + a] = a > p ? g[a * cap + p]! : g[p * cap + a]!;
    }
    for (let j = 0, from = 0; j < f; j += 1, from += cap) {
      const factor = row[from + p]!;
      const next = e[j + 1]!;
      const over = inverse[j]!;
      for (let i = 0; i < openCount; i += 1) {
        const a = open[i]!;
        row[base + a] = nearest((next * row[base + a]! + row[from + a]! * factor) * over);
      }
    }
    const next = e[f + 1]!;
    const over = inverse[f]!;
    for (let i = 0; i < openCount; i += 1) {
      const a = open[i]!;
      const r = row[base + a]!;
      diagonal[a] = nearest((next * diagonal[a]! + r * r) * over);
    }
    this.work += openCount * (f + 2);
  }

  get bytes(): number {
    return 8 * this.cap * this.cap + 48 * this.cap;
  }
}
