/**
 * The automorphism group of a positive definite integral form: generators and exact order.
 *
 * The group acts faithfully on the invariant vectors. A base b_1, …, b_m of them is chosen so that their cells separate
 * all vectors; then for k = m, …, 1 the orbit of b_k under the stabiliser of b_1, …, b_(k−1) is found by trying as image
 * one vector for each orbit, known so far, of its cell: a backtrack search either finds an automorphism, which becomes a
 * generator, or shows that there is none. The order is the product of the lengths of these orbits
 * (Plesken–Souvignier, J. Symb. Comp. 24 (1997)).
 */
import {
  inverse,
  lllGram,
  multiply,
  transpose,
  type BigMatrix,
  type RationalInverse,
  type ReadonlyBigMatrix,
  type Reduction,
} from '@palmette/exact';
import { Span } from './admissible-columns.ts';
import { AUTOMORPHISM_BOUNDS, BeyondBound } from './automorphism-bounds.ts';
import { invariantVectors } from './invariant-vectors.ts';
import { CellPath, VectorSet } from './vector-cells.ts';

export interface AutomorphismGroup {
  readonly order: bigint;
  /** r × r matrices X with X·gram·Xᵀ = gram; row i is the image of basis vector i. They generate the group. */
  readonly generators: readonly BigMatrix[];
}

/**
 * Aut of a positive definite form, or the bound that it meets.
 * @param gram r × r, positive definite
 * @throws RangeError if the form is not positive definite
 */
export function automorphismGroup(gram: ReadonlyBigMatrix): AutomorphismGroup | BeyondBound {
  if (gram.length === 0) return { order: 1n, generators: [] };
  if (gram.length > AUTOMORPHISM_BOUNDS.rank)
    return new BeyondBound(`the rank is ${gram.length}, above ${AUTOMORPHISM_BOUNDS.rank}`);
  try {
    const reduction = lllGram(gram);
    const { order, generators } = new StabiliserChain(reduction.gram).run();
    return { order, generators: generators.map((x) => inOldBasis(x, reduction)) };
  } catch (error) {
    if (error instanceof BeyondBound) return error;
    throw error;
  }
}

/** From x ↦ x·X in the reduced basis (columns of `change`) to the basis given. */
function inOldBasis(x: ReadonlyBigMatrix, { change, inverse: back }: Reduction): BigMatrix {
  return multiply(multiply(transpose(back), x), transpose(change));
}

/** A permutation of the vectors that an automorphism makes. */
type Permutation = Int32Array;

class StabiliserChain {
  private readonly set: VectorSet;
  private readonly path: CellPath;
  private readonly base: number[] = [];
  /** Cells before each vector of the base is placed, and after the last. */
  private readonly cells: Int32Array[];
  /** Place in the cells at the end → vector; every such cell has one vector. */
  private readonly separated: Int32Array;
  /** Of the matrix whose rows are the base. */
  private readonly basis: RationalInverse;
  /** For each vector up to sign 1 if it is not orthogonal to all of the base. */
  private readonly touched: Uint8Array;
  private readonly products: Float64Array;
  private readonly dependent = new Set<number>();

  constructor(private readonly gram: ReadonlyBigMatrix) {
    this.set = new VectorSet(gram, invariantVectors(gram));
    this.path = new CellPath(this.set);
    this.touched = new Uint8Array(this.set.count / 2);
    this.products = new Float64Array(this.set.count / 2);
    this.cells = [this.set.colours];
    const span = new Span();
    for (let next = this.nextOfBase(span); next !== null; next = this.nextOfBase(span)) {
      this.base.push(next);
      this.cells.push(this.path.extend(this.cells.at(-1)!, next));
    }
    this.separated = new Int32Array(this.set.count);
    this.cells.at(-1)!.forEach((cell, v) => (this.separated[cell] = v));
    this.basis = inverse(this.base.map((v) => this.set.coordinates(v)));
  }

  run(): { order: bigint; generators: BigMatrix[] } {
    const generators: BigMatrix[] = [];
    const permutations: Permutation[] = [];
    let order = 1n;
    for (let k = this.base.length - 1; k >= 0; k -= 1) {
      const cell = this.cells[k]!;
      const own = cell[this.base[k]!]!;
      const members = membersOf(own, cell);
      let orbit = orbitOf(this.base[k]!, permutations);
      const excluded = new Set<number>();
      for (const w of members) {
        if (orbit.has(w) || excluded.has(w)) continue;
        const found = this.search(k, w);
        if (found === null) {
          for (const v of orbitOf(w, permutations)) excluded.add(v);
        } else {
          permutations.push(found.permutation);
          generators.push(found.matrix);
          orbit = orbitOf(this.base[k]!, permutations);
        }
      }
      order *= BigInt(orbit.size);
    }
    return { order, generators };
  }

  /**
   * The next vector of the base, outside the span of the base (and added to it), or null if the base spans. Cells of one
   * vector come first: their image is forced, and they split other cells. Then vectors not orthogonal to all of the base,
   * so that a wrong image is met soon; then the smallest cell.
   */
  private nextOfBase(span: Span): number | null {
    if (span.dimension === this.gram.length) return null;
    const cells = this.cells.at(-1)!;
    const sizes = new Int32Array(this.set.count);
    for (const c of cells) sizes[c]! += 1;
    const delay = (v: number) => {
      const size = sizes[cells[v]!]!;
      return size === 1 || this.touched[v >> 1] ? size : size + this.set.count;
    };
    for (const v of Array.from(cells.keys()).sort((a, b) => delay(a) - delay(b) || a - b)) {
      if (this.dependent.has(v)) continue;
      if (span.add(this.set.coordinates(v))) {
        this.set.products(v, this.products);
        this.products.forEach((x, i) => (this.touched[i] ||= x === 0 ? 0 : 1));
        return v;
      }
      this.dependent.add(v);
    }
    throw new Error('the invariant vectors do not span');
  }

  /** An automorphism that fixes b_1, …, b_k (0-based: the first k of the base) and takes the next to w. */
  private search(k: number, w: number): { matrix: BigMatrix; permutation: Permutation } | null {
    const depth = this.base.length;
    const cells: Int32Array[] = this.cells.slice(0, k + 1);
    const candidates: number[][] = [];
    candidates[k] = [w];
    for (let at = k; at >= k;) {
      const image = candidates[at]!.pop();
      if (image === undefined) {
        at -= 1;
        continue;
      }
      if (this.path.placements > AUTOMORPHISM_BOUNDS.placements)
        throw new BeyondBound(`trying images takes more than ${AUTOMORPHISM_BOUNDS.placements} placements of vectors`);
      const next = this.path.follow(cells[at]!, at, image);
      if (next === null) continue;
      if (at + 1 === depth) {
        const found = this.automorphism(next);
        if (found !== null) return found;
        continue;
      }
      at += 1;
      cells[at] = next;
      const own = this.cells[at]![this.base[at]!]!;
      candidates[at] = membersOf(own, next);
    }
    return null;
  }

  /** The linear map that takes each vector to the one whose cell is its own, if it is an automorphism. */
  private automorphism(cells: Int32Array): { matrix: BigMatrix; permutation: Permutation } | null {
    const permutation = new Int32Array(this.set.count);
    cells.forEach((cell, v) => (permutation[this.separated[cell]!] = v));
    const { numerator, denominator } = this.basis;
    const scaled = multiply(
      numerator,
      this.base.map((v) => this.set.coordinates(permutation[v]!)),
    );
    if (scaled.some((row) => row.some((x) => x % denominator !== 0n))) return null;
    const matrix = scaled.map((row) => row.map((x) => x / denominator));
    const image = multiply(multiply(matrix, this.gram), transpose(matrix));
    if (image.some((row, i) => row.some((x, j) => x !== this.gram[i]![j]))) return null;
    return { matrix, permutation };
  }
}

function membersOf(cell: number, cells: Int32Array): number[] {
  const members: number[] = [];
  for (let v = cells.indexOf(cell); v >= 0; v = cells.indexOf(cell, v + 1)) members.push(v);
  return members;
}

function orbitOf(start: number, permutations: readonly Permutation[]): Set<number> {
  const orbit = new Set([start]);
  for (const v of orbit) for (const p of permutations) orbit.add(p[v]!);
  return orbit;
}
