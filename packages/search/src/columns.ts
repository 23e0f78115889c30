/**
 * The columns of a node: classes of equal columns (up to sign) with their multiplicity, each kept as the list of its
 * nonzero entries, and the number of zero columns. Flat arrays that are reused from node to node.
 */

export class Columns {
  count = 0;
  zeros = 0;
  /** Columns in each class. */
  mult = new Float64Array(16);
  /** Entries of class c: places start[c] … start[c + 1] − 1 of `rows` (depths) and `vals`. */
  start = new Int32Array(17);
  rows = new Int32Array(64);
  vals = new Float64Array(64);

  /** The root: n zero columns. */
  reset(zeros: number): void {
    this.count = 0;
    this.zeros = zeros;
    this.start[0] = 0;
  }

  reserveClass(): void {
    if (this.count < this.mult.length) return;
    this.mult = grownFloats(this.mult);
    const start = new Int32Array(this.mult.length + 1);
    start.set(this.start);
    this.start = start;
  }

  reserveEntries(size: number): void {
    while (size > this.rows.length) {
      const rows = new Int32Array(this.rows.length * 2);
      rows.set(this.rows);
      this.rows = rows;
      this.vals = grownFloats(this.vals);
    }
  }

  get bytes(): number {
    return 8 * this.mult.length + 4 * this.start.length + 4 * this.rows.length + 8 * this.vals.length;
  }
}

export function grownFloats(old: Float64Array): Float64Array<ArrayBuffer> {
  const out = new Float64Array(old.length * 2);
  out.set(old);
  return out;
}
