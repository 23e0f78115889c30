/**
 * The columns of a node where there are many of them or where numbers are large: what is equal up to sign stands once,
 * with its number and its nonzero entries; zero columns are a number.
 */
import type { Int } from './int-kinds.ts';

export interface Column {
  readonly count: number;
  /** Depths of its nonzero entries, and the entries. */
  readonly rows: readonly number[];
  readonly entries: readonly Int[];
}

export interface SparseNode {
  readonly columns: readonly Column[];
  readonly zeros: number;
}

/** One way to fill the next row: the nonzero values given to each column's copies, and to zero columns, both descending. */
export interface Filling {
  readonly values: readonly (readonly Int[])[];
  readonly onZeros: readonly Int[];
}

const NONE: readonly never[] = [];

/** The node that a filling leads to. */
export function sparseChild(node: SparseNode, depth: number, filling: Filling): SparseNode {
  const columns: Column[] = [];
  const addRuns = (values: readonly Int[], rows: readonly number[], entries: readonly Int[]) => {
    for (let i = 0; i < values.length;) {
      let j = i + 1;
      while (j < values.length && values[j] === values[i]) j += 1;
      columns.push({ count: j - i, rows: [...rows, depth], entries: [...entries, values[i]!] });
      i = j;
    }
  };
  node.columns.forEach((column, c) => {
    const values = filling.values[c]!;
    if (values.length === 0) {
      columns.push(column);
      return;
    }
    addRuns(values, column.rows, column.entries);
    if (values.length < column.count) columns.push({ ...column, count: column.count - values.length });
  });
  addRuns(filling.onZeros, NONE, NONE);
  return { columns, zeros: node.zeros - filling.onZeros.length };
}
