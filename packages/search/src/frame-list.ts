/**
 * The vectors that a frame is made of (FORMAT.md, F0 and F1): pairs (c, y) with T(c, c) + y² = d, taken up to sign, orthogonal if
 * T(c, c') + y·y' = 0. For n = r there is no y. Under a column a that was chosen first (F2) the same is asked of W − a·aᵀ, of determinant
 * F(a), whose T is (F(a)·T(c, c') + T(a, c)·T(a, c')) / d (Sylvester's identity).
 */
import type { AdmissibleColumns } from './admissible-columns.ts';
import { squareRoot } from './admissible-columns.ts';
import { roundedQuotient, type DualForm, type Residues } from './dual-form.ts';

export interface FrameList {
  readonly count: number;
  /** c by rows of W: vector k at k·rank. */
  readonly entries: Int32Array;
  /** y of each vector; null where frames have none. */
  readonly y: Float64Array | null;
  /** Place of (c, −y); its own where that is the same vector up to sign. The two stand side by side, y > 0 first. */
  readonly mirror: Int32Array | null;
  /** Under a column a: F(a), and T(a, c) of each vector. */
  readonly under: { readonly gap: number; readonly products: Float64Array } | null;
}

/** F0: the columns themselves. */
export function unitFrameList(columns: AdmissibleColumns): FrameList {
  return { count: columns.count, entries: columns.entries, y: null, mirror: null, under: null };
}

/** F1 for W itself: the columns whose gap is a square (all of `columns`), and (0, √d) if d is one. */
export function extendedFrameList(form: DualForm, columns: AdmissibleColumns): FrameList {
  const { rank } = form;
  const builder = new ListBuilder(rank, null);
  for (let k = 0; k < columns.count; k += 1) builder.add(columns.entries, k * rank, columns.roots[k]!, 0);
  const zero = exactRoot(form.determinant);
  if (zero >= 0) builder.add(new Int32Array(rank), 0, zero, 0);
  return builder.list();
}

/** Roots above this are not kept in doubles. */
const LARGEST_ROOT = 2n ** 50n;

/** Is F1 possible in doubles? The y are at most √d. */
export function rootsFit(form: DualForm): boolean {
  return form.determinant < LARGEST_ROOT ** 2n;
}

function exactRoot(determinant: bigint): number {
  let root = BigInt(Math.floor(Math.sqrt(Number(determinant))));
  while (root * root > determinant) root -= 1n;
  while ((root + 1n) ** 2n <= determinant) root += 1n;
  return root * root === determinant ? Number(root) : -1;
}

/**
 * F1 under a column a with F(a) > 0. The form must be direct.
 * @param candidates places of the columns that may still be used
 * @param products T(a, c) by place
 */
export function frameListUnder(
  form: DualForm,
  columns: AdmissibleColumns,
  candidates: Int32Array,
  count: number,
  gap: number,
  products: Float64Array,
): FrameList {
  const d = Number(form.determinant);
  const builder = new ListBuilder(form.rank, gap);
  for (let i = 0; i < count; i += 1) {
    const k = candidates[i]!;
    const t = products[k]!;
    const left = roundedQuotient(gap, columns.gaps[k]!, -t, t, d);
    if (left < 0) continue;
    const root = squareRoot(left);
    if (root >= 0) builder.add(columns.entries, k * form.rank, root, t);
  }
  const zero = squareRoot(gap);
  if (zero >= 0) builder.add(new Int32Array(form.rank), 0, zero, 0);
  return builder.list();
}

class ListBuilder {
  private readonly entries: number[] = [];
  private readonly y: number[] = [];
  private readonly mirror: number[] = [];
  private readonly products: number[] = [];
  constructor(
    private readonly rank: number,
    private readonly gap: number | null,
  ) {}

  add(from: Int32Array, at: number, root: number, product: number): void {
    const twin = root !== 0 && from.subarray(at, at + this.rank).some((x) => x !== 0);
    const place = this.y.length;
    for (const [offset, y] of twin ? [root, -root].entries() : [[0, root] as const]) {
      for (let i = 0; i < this.rank; i += 1) this.entries.push(from[at + i]!);
      this.y.push(y);
      this.mirror.push(twin ? place + 1 - offset : place);
      this.products.push(product);
    }
  }

  list(): FrameList {
    return {
      count: this.y.length,
      entries: Int32Array.from(this.entries),
      y: Float64Array.from(this.y),
      mirror: Int32Array.from(this.mirror),
      under: this.gap === null ? null : { gap: this.gap, products: Float64Array.from(this.products) },
    };
  }
}

/** Which vectors of a list are orthogonal to one of them: aimed at one, asked about many. */
export class Orthogonality {
  private readonly image: Float64Array;
  private readonly images: Float64Array[];
  private list!: FrameList;
  private y = 0;
  private product = 0;
  constructor(private readonly form: DualForm) {
    this.image = new Float64Array(form.rank);
    this.images = form.residues.map(() => new Float64Array(form.rank));
  }

  aim(list: FrameList, vector: number): void {
    this.list = list;
    this.y = list.y === null ? 0 : list.y[vector]!;
    this.product = list.under === null ? 0 : list.under.products[vector]!;
    const { rank, direct } = this.form;
    const at = vector * rank;
    if (direct !== null) return apply(direct, list.entries, at, rank, this.image);
    this.form.residues.forEach(({ adjugate, modulus }, i) => {
      const image = this.images[i]!;
      apply(adjugate, list.entries, at, rank, image);
      for (let j = 0; j < rank; j += 1) image[j]! %= modulus;
    });
  }

  to(vector: number): boolean {
    const { form, list } = this;
    const at = vector * form.rank;
    const y = list.y === null ? 0 : this.y * list.y[vector]!;
    if (form.direct === null)
      return form.residues.every((residues, i) => this.vanishes(residues, this.images[i]!, at, vector));
    const t = dot(this.image, list.entries, at, form.rank);
    if (list.under === null) return t + y === 0;
    const { gap, products } = list.under;
    return roundedQuotient(gap, t, this.product, products[vector]!, Number(form.determinant)) + y === 0;
  }

  private vanishes({ modulus }: Residues, image: Float64Array, at: number, vector: number): boolean {
    const t = dot(image, this.list.entries, at, this.form.rank) % modulus;
    const y = this.list.y === null ? 0 : (this.y % modulus) * (this.list.y[vector]! % modulus);
    return (t + y) % modulus === 0;
  }
}

/** (adj W)·c into `image`. */
export function apply(
  adjugate: Float64Array,
  entries: Int32Array,
  at: number,
  rank: number,
  image: Float64Array,
): void {
  image.fill(0);
  for (let j = 0; j < rank; j += 1) {
    const x = entries[at + j]!;
    if (x === 0) continue;
    // adj W is symmetric: its row j is its column j
    for (let i = 0, from = j * rank; i < rank; i += 1, from += 1) image[i]! += adjugate[from]! * x;
  }
}

export function dot(image: Float64Array, entries: Int32Array, at: number, rank: number): number {
  let sum = 0;
  for (let i = 0; i < rank; i += 1) sum += image[i]! * entries[at + i]!;
  return sum;
}
