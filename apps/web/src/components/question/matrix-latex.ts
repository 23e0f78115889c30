/** A matrix as LaTeX, for a paper. */
import { denseRows, type FileMatrix } from '../../api/certificate-file.ts';

export function matrixLatex(matrix: FileMatrix<number | string>): string {
  const rows = denseRows<number | string>(matrix, 0).map((row) => `  ${row.join(' & ')}`);
  return `\\begin{pmatrix}\n${rows.join(' \\\\\n')}\n\\end{pmatrix}`;
}
