/**
 * The vectors that a frame is made of (FORMAT.md, F0 and F1): pairs (c, y) with T(c, c) + y² = d, taken up to sign, orthogonal if
 * T(c, c') + y·y' = 0. For n = r there is no y. Under a column a that was chosen first (F2) the same is asked of W − a·aᵀ, of determinant
 * F(a), whose T is (F(a)·T(c, c') + T(a, c)·T(a, c')) / d (Sylvester's identity).
 */
import type { AdmissibleColumns } from './admissible-columns.ts';
import type { DualForm } from './dual-form.ts';
import type { UnderColumn } from './under-column.ts';

export interface FrameList {
  readonly count: number;
  /** c by rows of W: vector k at k·rank. */
  readonly entries: Int32Array;
  /** y of each vector; null where frames have none. */
  readonly y: Float64Array | null;
  /** Place of (c, −y); its own where that is the same vector up to sign. The two stand side by side, y > 0 first. */
  readonly mirror: Int32Array | null;
  /** Under a column a: F(a), and T(a, c) of each vector. */
  readonly under: Under | null;
}

/** In doubles where the form is direct, else modulo each of its residues. */
export interface Under {
  readonly direct: { readonly gap: number; readonly products: Float64Array } | null;
  readonly residues: readonly { readonly gap: number; readonly determinant: number; readonly products: Float64Array }[];
}

/** F0: the columns themselves. */
export function unitFrameList(columns: AdmissibleColumns): FrameList {
  return { count: columns.count, entries: columns.entries, y: null, mirror: null, under: null };
}

/** F1 for W itself: the columns whose gap is a square (all of `columns`), and (0, √d) if d is one. */
export function extendedFrameList(form: DualForm, columns: AdmissibleColumns): FrameList {
  const { rank } = form;
  const builder = new ListBuilder(rank);
  for (let k = 0; k < columns.count; k += 1) builder.add(columns.entries, k * rank, columns.roots[k]!, 0n);
  const zero = exactRoot(form.determinant);
  if (zero >= 0) builder.add(new Int32Array(rank), 0, zero, 0n);
  return builder.list(null);
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
 * F1 under the column that `under` is aimed at, whose gap is above 0.
 * @param candidates places of the columns that may still be used
 */
export function frameListUnder(
  form: DualForm,
  columns: AdmissibleColumns,
  candidates: Int32Array,
  count: number,
  under: UnderColumn,
): FrameList {
  const builder = new ListBuilder(form.rank);
  for (let i = 0; i < count; i += 1) {
    const k = candidates[i]!;
    const root = under.root(k);
    if (root >= 0) builder.add(columns.entries, k * form.rank, root, under.product(k));
  }
  const zero = exactRoot(under.gap);
  if (zero >= 0) builder.add(new Int32Array(form.rank), 0, zero, 0n);
  return builder.list({ form, gap: under.gap });
}

class ListBuilder {
  private readonly entries: number[] = [];
  private readonly y: number[] = [];
  private readonly mirror: number[] = [];
  private readonly products: bigint[] = [];
  constructor(private readonly rank: number) {}

  add(from: Int32Array, at: number, root: number, product: bigint): void {
    const twin = root !== 0 && from.subarray(at, at + this.rank).some((x) => x !== 0);
    const place = this.y.length;
    for (const [offset, y] of twin ? [root, -root].entries() : [[0, root] as const]) {
      for (let i = 0; i < this.rank; i += 1) this.entries.push(from[at + i]!);
      this.y.push(y);
      this.mirror.push(twin ? place + 1 - offset : place);
      this.products.push(product);
    }
  }

  list(under: { readonly form: DualForm; readonly gap: bigint } | null): FrameList {
    return {
      count: this.y.length,
      entries: Int32Array.from(this.entries),
      y: Float64Array.from(this.y),
      mirror: Int32Array.from(this.mirror),
      under: under === null ? null : this.under(under.form, under.gap),
    };
  }

  private under(form: DualForm, gap: bigint): Under {
    const { products } = this;
    return {
      direct: form.direct === null ? null : { gap: Number(gap), products: Float64Array.from(products, Number) },
      residues: form.residues.map(({ modulus }) => {
        const big = BigInt(modulus);
        return {
          gap: Number(gap % big),
          determinant: Number(form.determinant % big),
          products: Float64Array.from(products, (x) => Number(x % big)),
        };
      }),
    };
  }
}
