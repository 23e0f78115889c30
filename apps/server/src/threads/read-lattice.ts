/** Thread: builds the lattice of a source, to refuse what has none before it is accepted. */
import { buildLattice, SourceFault, type Source } from '@palmette/lattice';

export type LatticeReading =
  | { readonly fault: null }
  | { readonly fault: { readonly code: 'source' | 'limit'; readonly path: string; readonly message: string } };

export default function readLattice(source: Source): LatticeReading {
  try {
    buildLattice(source);
    return { fault: null };
  } catch (error) {
    if (error instanceof SourceFault) return { fault: { code: error.code, path: error.path, message: error.message } };
    throw error;
  }
}
