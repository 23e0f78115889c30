/** Exclusions and trees: what has to be proved, and what has to be enumerated for it. FORMAT.md, section 7. */
import { times, turned, type Matrix } from './arithmetic.ts';
import { checkDeterminantGround, checkDimensionGround, checkHilbertGround } from './grounds.ts';
import { readStringMatrix, type CheckedLattice } from './lattice.ts';
import { countOf, listOf, NotChecked, objectOf, oneOf, Rejection, stringIntegerOf, type Json } from './reading.ts';
import type { CheckTree } from './tree.ts';

export interface CheckedExclusion {
  readonly dimension: number | null;
  readonly ground: string;
}

const GROUNDS = ['dimension', 'determinant', 'hilbert', 'exhaustion'] as const;

/** Checks one exclusion as far as no tree is needed; a tree is appended to `trees`. */
export function checkExclusion(
  lattice: CheckedLattice,
  value: Json,
  place: string,
  trees: CheckTree[],
): CheckedExclusion {
  const name = (value as { ground?: Json } | null)?.ground;
  if (typeof name === 'string' && !(GROUNDS as readonly string[]).includes(name))
    throw new NotChecked(`the ground ${JSON.stringify(name)} is not known here`);
  const ground = oneOf(name, `${place}/ground`, GROUNDS);
  const extra = ground === 'hilbert' ? ['primes'] : ground === 'exhaustion' ? ['tree'] : [];
  const o = objectOf(value, place, ['dimension', 'ground', ...extra]);
  const dimension = o['dimension'] === null ? null : countOf(o['dimension'], `${place}/dimension`);
  if (ground === 'exhaustion') {
    const tree = readTree(lattice, o['tree'], `${place}/tree`);
    checkWidth(tree, dimension, `${place}/tree/dimension`);
    if (tree.orbits !== 0n) throw new Rejection(`${place}/tree/orbits`, 'an exclusion has no orbit');
    trees.push(tree);
    return { dimension, ground };
  }
  if (dimension === null) throw new Rejection(`${place}/dimension`, `the ground ${ground} speaks about one n`);
  if (ground === 'dimension') checkDimensionGround(lattice, dimension, place);
  else if (ground === 'determinant') checkDeterminantGround(lattice, dimension, place);
  else checkHilbertGround(lattice, dimension, o['primes'], place);
  return { dimension, ground };
}

/** The tree that lists every embedding. */
export function checkListTree(
  lattice: CheckedLattice,
  value: Json | undefined,
  dimension: number | null,
  place: string,
): CheckTree {
  const tree = readTree(lattice, value, place);
  checkWidth(tree, dimension, `${place}/dimension`);
  return tree;
}

/** n itself, or for every n at least the trace of the working Gram (rule A). */
function checkWidth(tree: CheckTree, dimension: number | null, place: string): void {
  const trace = tree.gram.reduce((sum, row, i) => sum + row[i]!, 0n);
  if (dimension === null ? BigInt(tree.dimension) < trace : tree.dimension !== dimension) {
    throw new Rejection(place, dimension === null ? `expected at least the trace ${trace}` : `expected ${dimension}`);
  }
}

function readTree(lattice: CheckedLattice, value: Json | undefined, place: string): CheckTree {
  const method = (value as { method?: Json } | null)?.method;
  if (typeof method === 'string' && method !== 'rows')
    throw new NotChecked(`the method ${JSON.stringify(method)} is not known here`);
  const o = objectOf(value, place, ['method', 'revision', 'dimension', 'basis', 'order', 'nodes', 'orbits']);
  if (method !== 'rows') throw new Rejection(`${place}/method`, 'expected rows');
  if (countOf(o['revision'], `${place}/revision`) !== 1)
    throw new NotChecked(`revision ${String(o['revision'])} of the method rows is not known here`);
  const dimension = countOf(o['dimension'], `${place}/dimension`);
  const working = readWorkingGram(lattice, o['basis'], `${place}/basis`);
  const order = listOf(o['order'], `${place}/order`).map((w, i) => countOf(w, `${place}/order/${i}`));
  if (order.length !== lattice.rank || new Set(order).size !== lattice.rank || order.some((w) => w >= lattice.rank))
    throw new Rejection(`${place}/order`, `expected a permutation of ${lattice.rank} rows`);
  return {
    place,
    dimension,
    gram: order.map((v) => order.map((w) => working[v]![w]!)),
    nodes: stringIntegerOf(o['nodes'], `${place}/nodes`),
    orbits: stringIntegerOf(o['orbits'], `${place}/orbits`),
  };
}

/** W with Uᵀ·gram·U = W ⊕ 0; that U·V = 1 shows that U is unimodular. */
function readWorkingGram(lattice: CheckedLattice, value: Json | undefined, place: string): Matrix {
  const size = lattice.gram.length;
  if (value === null) {
    if (lattice.nullity > 0) throw new Rejection(place, 'the radical has to be split off');
    return lattice.gram;
  }
  const o = objectOf(value, place, ['matrix', 'inverse']);
  const u = readStringMatrix(o['matrix'], `${place}/matrix`, size, size, size);
  const v = readStringMatrix(o['inverse'], `${place}/inverse`, size, size, size);
  if (times(u, v).some((row, i) => row.some((x, j) => x !== (i === j ? 1n : 0n))))
    throw new Rejection(`${place}/inverse`, 'matrix times inverse is not 1');
  const product = times(turned(u), times(lattice.gram, u));
  product.forEach((row, i) =>
    row.forEach((x, j) => {
      if ((i >= lattice.rank || j >= lattice.rank) && x !== 0n)
        throw new Rejection(`${place}/matrix`, 'the last vectors are not in the radical');
    }),
  );
  return product.slice(0, lattice.rank).map((row) => row.slice(0, lattice.rank));
}
