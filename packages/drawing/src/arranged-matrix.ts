/** The matrix that stands beside a trellis: its rows and columns in the order of the drawing, signs and all. */
import type { DrawnInteger } from './numerals.ts';
import type { Trellis } from './trellis.ts';

export interface ArrangedMatrix {
  /** One row for each vertex, in drawing order; bare columns are left out. */
  readonly rows: readonly (readonly DrawnInteger[])[];
  readonly rowNames: readonly string[];
  /** “e_6”, one for each column. */
  readonly columnNames: readonly string[];
}

export function arrangedMatrix(trellis: Trellis): ArrangedMatrix {
  const width = trellis.wires.reduce((sum, { columns }) => sum + columns.length, 0);
  const rows = trellis.vertices.map(() => new Array<DrawnInteger>(width).fill(0));
  let at = 0;
  for (const { entries, columns } of trellis.wires) {
    for (let copy = 0; copy < columns.length; copy += 1, at += 1) {
      for (const { place, value } of entries) rows[place]![at] = value;
    }
  }
  return {
    rows,
    rowNames: trellis.vertices.map(({ name }) => name),
    columnNames: trellis.wires.flatMap(({ label, first, columns }) =>
      columns.map((_, i) => `e_{${columns.length === 1 ? label[1]!.text : first + i}}`),
    ),
  };
}
