/** What the trellis needs of a lattice: names, weights, edges and radical vectors, read from the certificate's head. */
import type { Question } from '@palmette/contracts';
import { denseRows, type FileHead } from '../../api/certificate-file.ts';

export interface LatticePicture {
  readonly names: readonly string[];
  /** As entered: with the sign of the form. */
  readonly weights: readonly string[];
  /** Pairs that meet, with the entry of the form as entered. */
  readonly edges: readonly (readonly [number, number, number])[];
  readonly radical: readonly (readonly string[])[];
}

export function latticePicture(head: FileHead, source: Question['source']): LatticePicture {
  const { sign, radical } = head.lattice;
  const rows = denseRows(head.lattice.gram, '0');
  const entered = (x: string) => (sign === 1 || x === '0' ? x : x.startsWith('-') ? x.slice(1) : `-${x}`);
  const edges: [number, number, number][] = [];
  rows.forEach((row, i) => {
    for (let j = i + 1; j < row.length; j += 1) {
      if (row[j] !== '0') edges.push([i, j, Number(entered(row[j]!))]);
    }
  });
  return {
    names: source.kind === 'tree' ? source.vertices.map((vertex) => vertex.name) : rows.map((_, i) => String(i + 1)),
    weights: rows.map((row, i) => entered(row[i]!)),
    edges,
    radical,
  };
}
