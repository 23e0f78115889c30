/** The ways to list embeddings, in words: what each goes through, and when it cannot answer (FORMAT.md, section 7). */
import type { MethodName } from '@palmette/contracts';
import { plural } from './numbers.ts';

export interface MethodWords {
  /** “frames”. */
  readonly name: string;
  /** One sentence on what it goes through. */
  readonly what: string;
  /** When it cannot answer; empty if it always can. */
  readonly unless: string;
}

export const METHOD_WORDS: Readonly<Record<MethodName, MethodWords>> = {
  rows: {
    name: 'rows',
    what: 'places the images of the basis vectors one after another',
    unless: '',
  },
  columns: {
    name: 'columns',
    what: 'adds up the columns that could occur until the form is reached; good for large n and for any n',
    unless: 'it needs a list of all those columns, and refuses if there are too many',
  },
  frames: {
    name: 'frames',
    what: 'looks for columns that are orthogonal in the dual, or glues the lattice to unimodular ones; good near the rank',
    unless: 'it answers only for n − rank from 0 to 2',
  },
};

/** What a certificate says about one tree that was searched whole. */
export interface TreeFacts {
  readonly method: string;
  /** Of a tree of rows. */
  readonly nodes?: string | undefined;
  /** Of frames and columns: admissible columns up to sign. */
  readonly vectors?: string | undefined;
  /** Of frames by gluing: unimodular lattices that were looked at. */
  readonly glued?: string | undefined;
}

/** “rows, 120 nodes”, “frames, out of 36 columns that could occur”. */
export function treeInWords({ method, nodes, vectors, glued }: TreeFacts): string {
  if (nodes !== undefined) return `${method}, ${plural(nodes, 'node')}`;
  if (vectors !== undefined) return `${method}, out of ${plural(vectors, 'column')} that could occur`;
  if (glued !== undefined) return `${method} by gluing, ${plural(glued, 'unimodular lattice')}`;
  return method;
}

/** “two methods agree: rows, frames”, always in the same order. */
export function agreementInWords(methods: readonly string[]): string {
  const order = Object.keys(METHOD_WORDS);
  return `two methods agree: ${[...methods].sort((a, b) => order.indexOf(a) - order.indexOf(b)).join(', ')}`;
}

/** Why a second opinion that was asked for is not there. */
export function noSecondInWords(ground: string | null): string {
  if (ground === 'exhaustion') return 'no other method can list this in reach, so there is one opinion';
  if (ground === 'embedding') return 'not needed: the embedding that is listed shows it by itself';
  return 'not needed: arithmetic settles it without a search';
}
