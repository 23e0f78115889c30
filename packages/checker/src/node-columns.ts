/** The columns of one node of a tree: what is equal up to sign stands once, with its number; zero columns are a number. */

export interface Column<T> {
  readonly count: number;
  /** Nonzero entries as [depth, entry]. */
  readonly entries: readonly (readonly [number, T])[];
}

export interface NodeColumns<T> {
  readonly columns: readonly Column<T>[];
  readonly zeros: number;
}

/** One way to fill the next row: the values given to each column's copies, and to zero columns. */
export interface Filling<T> {
  /** For the column of that place its nonzero values; copies without one keep 0. */
  readonly values: readonly (readonly T[])[];
  readonly onZeros: readonly T[];
}

/** The node that a filling leads to. */
export function child<T extends number | bigint>(
  node: NodeColumns<T>,
  depth: number,
  filling: Filling<T>,
): NodeColumns<T> {
  const columns: Column<T>[] = [];
  const runs = (values: readonly T[], entries: Column<T>['entries']) => {
    for (let i = 0; i < values.length;) {
      let j = i;
      while (j < values.length && values[j] === values[i]) j += 1;
      columns.push({ count: j - i, entries: [...entries, [depth, values[i]!]] });
      i = j;
    }
  };
  node.columns.forEach((column, c) => {
    const values = filling.values[c]!;
    runs(values, column.entries);
    if (values.length < column.count) columns.push({ count: column.count - values.length, entries: column.entries });
  });
  runs(filling.onZeros, []);
  return { columns, zeros: node.zeros - filling.onZeros.length };
}
