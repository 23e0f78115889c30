/** An embedding and its lattice as the drawing takes them. */
import type { TrellisInput } from '@palmette/drawing';
import type { FileEmbedding } from '../../api/certificate-file.ts';
import type { LatticePicture } from './lattice-picture.ts';

/** @param matrix the embedding's rows, none left out */
export function trellisInput(
  embedding: FileEmbedding,
  matrix: readonly (readonly (number | string)[])[],
  picture: LatticePicture,
): TrellisInput {
  return {
    matrix,
    zeroColumns: embedding.zeroColumns ?? 0,
    names: picture.names,
    weights: picture.weights,
    edges: picture.edges,
    radical: picture.radical,
  };
}
