/** What the trellis needs of a lattice: names, weights, edges and radical vectors, read from the certificate's head. */
import type { Question } from '@palmette/contracts';
import { denseRows, type FileHead } from '../../api/certificate-file.ts';

export interface LatticePicture {
  readonly names: readonly string[];
  /** As entered: with the sign of the form. */
  readonly weights: readonly string[];
  /** Pairs that meet, with the sign of their product as entered. */
  readonly edges: readonly (readonly [number, number, 1 | -1])[];
  readonly radical: readonly (readonly string[])[];
}

/** A picture with more edges for each vertex than this is no graph any more: the matrix says it better. */
const EDGES_PER_VERTEX = 3;

export function latticePicture(head: FileHead, source: Question['source']): LatticePicture {
  const { sign, radical } = head.lattice;
  const rows = denseRows(head.lattice.gram, '0');
  const entered = (x: string) => (sign === 1 || x === '0' ? x : x.startsWith('-') ? x.slice(1) : `-${x}`);
  const edges: [number, number, 1 | -1][] = [];
  rows.forEach((row, i) => {
    for (let j = i + 1; j < row.length; j += 1) {
      if (row[j] !== '0') edges.push([i, j, row[j]!.startsWith('-') === (sign === 1) ? -1 : 1]);
    }
  });
  return {
    names: source.kind === 'tree' ? source.vertices.map((vertex) => vertex.name) : rows.map((_, i) => String(i + 1)),
    weights: rows.map((row, i) => entered(row[i]!)),
    edges: edges.length > EDGES_PER_VERTEX * rows.length ? [] : edges,
    radical,
  };
}
