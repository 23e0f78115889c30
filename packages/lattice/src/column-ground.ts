/**
 * The ground `column` (FORMAT.md, section 7): the nonzero columns of an embedding of W are admissible and span Q^r, so
 * a form whose admissible columns do not span has no embedding. Decided by listing them, without a search.
 */
import type { ReadonlyBigMatrix } from '@palmette/exact';
import { listAdmissibleColumns, Span } from './admissible-columns.ts';

export interface ColumnGround {
  readonly ground: 'column';
  /** Number of admissible columns up to sign. */
  readonly vectors: string;
  /** Dimension of their span, below the rank. */
  readonly spanned: number;
}

/**
 * Whether the admissible columns of a form fail to span.
 * @param gram r × r, positive definite; best LLL-reduced (the answer does not depend on the basis, the steps do)
 * @param n the dimension asked about; null asks about every n. At n = r only columns with cᵀW⁻¹c = 1 count.
 * @param maxSteps entries tried before the answer is 'too many'
 * @returns the ground, null where it does not exclude, or 'too many'
 */
export function columnGround(
  gram: ReadonlyBigMatrix,
  n: number | null,
  maxSteps: number,
): ColumnGround | null | 'too many' {
  const rank = gram.length;
  if (rank === 0 || (n !== null && n < rank)) return null;
  const span = new Span();
  let vectors = 0;
  const end = listAdmissibleColumns(gram, { unitOnly: n === rank, maxSteps }, (column) => {
    vectors += 1;
    span.add(column);
    return span.dimension === rank;
  });
  if (end === 'too many') return 'too many';
  return end === 'stopped' ? null : { ground: 'column', vectors: String(vectors), spanned: span.dimension };
}
