/**
 * Cells of a finite set of vectors: two vectors share a cell if their colours agree and so do their inner products with
 * every vector placed so far. A sequence of images is followed cell by cell; where a cell of another size or kind
 * appears, no automorphism extends it (the fingerprint of Plesken–Souvignier, J. Symb. Comp. 24 (1997), for all cells).
 */
import { dot, multiply, type ReadonlyBigMatrix } from '@palmette/exact';
import type { InvariantVector } from './invariant-vectors.ts';

/** The vectors with both signs: vector 2i and its negative 2i + 1. */
export class VectorSet {
  readonly count: number;
  /** Cell of each vector before anything is placed. */
  readonly colours: Int32Array;
  readonly norms: readonly bigint[];
  private readonly rank: number;
  private readonly half: readonly (readonly bigint[])[];
  /** Coordinates and their products with the Gram matrix as doubles, or null where doubles might round. */
  private readonly doubles: { readonly x: Float64Array; readonly gx: Float64Array } | null;
  private readonly images: ReadonlyBigMatrix;
  private readonly known = new Map<bigint, number>();

  constructor(gram: ReadonlyBigMatrix, vectors: readonly InvariantVector[]) {
    this.rank = gram.length;
    this.half = vectors.map((v) => v.coordinates);
    this.count = 2 * vectors.length;
    this.images = multiply(this.half, gram);
    this.norms = this.half.map((v, i) => dot(v, this.images[i]!));
    this.doubles = this.exactDoubles();
    const names = new Map<string, number>();
    this.colours = Int32Array.from({ length: this.count }, (_, i) => {
      const name = `${vectors[i >> 1]!.layer},${this.norms[i >> 1]!}`;
      if (!names.has(name)) names.set(name, names.size);
      return names.get(name)!;
    });
  }

  coordinates(i: number): bigint[] {
    const v = this.half[i >> 1]!;
    return i % 2 === 0 ? [...v] : v.map((x) => -x);
  }

  /** Numbers that stand for the inner products of vector i with each vector of even number; −x stands for the negative. */
  products(i: number, out: Float64Array): void {
    const sign = i % 2 === 0 ? 1 : -1;
    const half = i >> 1;
    if (this.doubles === null) {
      this.half.forEach((v, k) => {
        const product = dot(v, this.images[half]!);
        out[k] = sign * (product < 0n ? -this.name(-product) : this.name(product));
      });
      return;
    }
    const { x, gx } = this.doubles;
    const { rank } = this;
    for (let k = 0, at = 0; k < this.half.length; k += 1, at += rank) {
      let sum = 0;
      for (let j = 0, g = half * rank; j < rank; j += 1, g += 1) sum += gx[g]! * x[at + j]!;
      out[k] = sign * sum;
    }
  }

  /** 0 for 0, and a positive number for each positive product met. */
  private name(product: bigint): number {
    if (product === 0n) return 0;
    if (!this.known.has(product)) this.known.set(product, this.known.size + 1);
    return this.known.get(product)!;
  }

  /** Doubles are used only if no sum of products can reach 2^40, so that keys made of them stay exact too. */
  private exactDoubles(): VectorSet['doubles'] {
    const largest = (rows: ReadonlyBigMatrix) => {
      let most = 0n;
      for (const row of rows) for (const x of row) most = x > most ? x : -x > most ? -x : most;
      return most;
    };
    if (BigInt(this.rank) * largest(this.half) * largest(this.images) >= 2n ** 40n) return null;
    return { x: Float64Array.from(this.half.flat(), Number), gx: Float64Array.from(this.images.flat(), Number) };
  }
}

/** One placement: how cells split by the inner product with the vector placed. */
interface Split {
  /** From an old cell and a product to the new cell. */
  readonly cells: ReadonlyMap<number, number>;
  readonly sizes: Int32Array;
}

/** Products are below 2^40 and cells below 2^13, so a key is an exact double. */
const PRODUCT_SPAN = 2 ** 40;

/** The splits along a sequence of vectors, and the test whether another sequence splits the set alike. */
export class CellPath {
  private readonly splits: Split[] = [];
  private readonly products: Float64Array;
  /** Vectors put into cells so far. */
  placements = 0;

  constructor(private readonly set: VectorSet) {
    this.products = new Float64Array(set.count / 2);
  }

  get depth(): number {
    return this.splits.length;
  }

  /** Places vector i next, and returns the cells that this makes of `cells`. */
  extend(cells: Int32Array, i: number): Int32Array {
    const names = new Map<number, number>();
    const sizes: number[] = [];
    const out = new Int32Array(this.set.count);
    this.visit(cells, i, (v, key) => {
      let cell = names.get(key);
      if (cell === undefined) {
        cell = names.size;
        names.set(key, cell);
        sizes.push(0);
      }
      sizes[cell]! += 1;
      out[v] = cell;
      return true;
    });
    this.splits.push({ cells: names, sizes: Int32Array.from(sizes) });
    return out;
  }

  /** The cells after vector i is placed at a depth in place of the one of the path, or null if they do not correspond. */
  follow(cells: Int32Array, depth: number, i: number): Int32Array | null {
    const { cells: names, sizes } = this.splits[depth]!;
    const left = sizes.slice();
    const out = new Int32Array(this.set.count);
    const alike = this.visit(cells, i, (v, key) => {
      const cell = names.get(key);
      if (cell === undefined || left[cell] === 0) return false;
      left[cell]! -= 1;
      out[v] = cell;
      return true;
    });
    return alike ? out : null;
  }

  private visit(cells: Int32Array, i: number, place: (v: number, key: number) => boolean): boolean {
    this.set.products(i, this.products);
    this.placements += this.set.count;
    for (let v = 0; v < this.set.count; v += 1) {
      const product = v % 2 === 0 ? this.products[v >> 1]! : -this.products[v >> 1]!;
      if (!place(v, cells[v]! * PRODUCT_SPAN + product)) return false;
    }
    return true;
  }
}
