/** Trees as the checker enumerates them: what is asked, and runs over intervals. FORMAT.md, section 7. */
import type { Matrix } from './arithmetic.ts';
import { Enumeration } from './enumeration.ts';
import { FewestRun, splitFewest } from './fewest-run.ts';
import { GlueRun, splitGlued } from './glue-run.ts';
import { splitVectors, VectorRun } from './vector-run.ts';

/** What has to be enumerated, and what the certificate says about it. */
export interface CheckTree {
  /** Where the tree stands in the certificate. */
  readonly place: string;
  readonly method: 'rows' | 'frames' | 'columns';
  /** Null: any number of columns. */
  readonly dimension: number | null;
  /** The working Gram; of a tree of rows in their order. */
  readonly gram: Matrix;
  /** Present for frames by gluing: the primes of the determinant. */
  readonly primes?: readonly bigint[];
  /** Nodes of a tree of rows, admissible columns of the others, lattices of frames by gluing. */
  readonly nodes: bigint;
  readonly orbits: bigint;
}

/** A tree of rows. */
export interface CheckRowsTree extends CheckTree {
  readonly method: 'rows';
  readonly dimension: number;
  /** Revision 2: the row is chosen at each node, in this order where several have as few children. */
  readonly chosen?: true;
}

function isRows(tree: CheckTree): tree is CheckRowsTree {
  return tree.method === 'rows';
}

/** Nodes from one address to another, in depth-first order; an address is a list of child numbers from the root. */
export interface CheckInterval {
  readonly from: readonly number[];
  readonly to: readonly number[] | null;
}

export interface CheckRun {
  /** Works for about this many nodes; a slice may be as small as one likes. */
  advance(nodes: number): 'more' | 'done';
  /** JSON; with the interval it leads to the same counts. */
  checkpoint(): string;
  readonly nodes: bigint;
  readonly orbits: bigint;
  /** Part of the interval that is done, as far as the first children that differ in its ends tell. */
  readonly shareDone: number;
}

export function openCheckRun(tree: CheckTree, interval: CheckInterval, checkpoint?: string): CheckRun {
  if (isRows(tree))
    return tree.chosen === true
      ? new FewestRun(tree, interval, checkpoint)
      : new Enumeration(tree, interval, checkpoint);
  return tree.primes === undefined
    ? new VectorRun(tree, interval, checkpoint)
    : new GlueRun(tree, interval, checkpoint);
}

/** Cut at a depth with this many nodes for each piece, so that pieces even out. */
const NODES_PER_PIECE = 16;
const MOST_NODES_PER_PIECE = 256;

/** At most `pieces` intervals that abut from the root to the end: cut at the nodes of one depth. */
export function splitCheck(tree: CheckTree, pieces: number): CheckInterval[] {
  if (!isRows(tree)) return tree.primes === undefined ? splitVectors(tree, pieces) : splitGlued(tree, pieces);
  if (tree.chosen === true) return splitFewest(tree, pieces);
  let cuts: (readonly number[])[] = [];
  for (let depth = 1; depth <= tree.gram.length && cuts.length < pieces * NODES_PER_PIECE; depth += 1) {
    const next = nodesAtDepth(tree, depth, pieces * MOST_NODES_PER_PIECE);
    if (next === null) break;
    cuts = next;
  }
  const stride = Math.max(1, Math.ceil(cuts.length / pieces));
  const starts = [[], ...cuts.filter((_, i) => i > 0 && i % stride === 0)];
  return starts.map((from, i) => ({ from, to: starts[i + 1] ?? null }));
}

/** Addresses of all nodes at a depth, or null if there are more than `most`. */
function nodesAtDepth(tree: CheckRowsTree, depth: number, most: number): number[][] | null {
  const shallow: CheckRowsTree = { ...tree, gram: tree.gram.slice(0, depth).map((row) => row.slice(0, depth)) };
  const run = new Enumeration(shallow, { from: [], to: null });
  const out: number[][] = [];
  run.onLeaf = (address) => out.push(address);
  while (run.advance(most) === 'more') if (out.length > most) return null;
  return out.length > most ? null : out;
}
