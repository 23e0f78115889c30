/** A matrix for a paper. */
import type { DrawnInteger } from './numerals.ts';

/** Columns that a bracketed matrix has without a setting of its own. */
const PLAIN_COLUMNS = 10;

export function matrixToLatex(rows: readonly (readonly DrawnInteger[])[]): string {
  const width = rows[0]?.length ?? 0;
  const lines = rows.map((row) => `  ${row.map(String).join(' & ')}`);
  return [
    ...(width > PLAIN_COLUMNS ? [`\\setcounter{MaxMatrixCols}{${width}}`] : []),
    '\\begin{bmatrix}',
    lines.join(' \\\\\n'),
    '\\end{bmatrix}',
    '',
  ].join('\n');
}
