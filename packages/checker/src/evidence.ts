/** Exclusions and trees: what has to be proved, and what has to be enumerated for it. FORMAT.md, section 7. */
import { times, turned, type Matrix } from './arithmetic.ts';
import { checkDeterminantGround, checkDimensionGround, checkHilbertGround } from './grounds.ts';
import { readStringMatrix, type CheckedLattice } from './lattice.ts';
import { dualForm } from './dual-form.ts';
import { isPrime, PRIME_BOUND } from './unit-roots.ts';
import { listColumns, spanOf } from './dual-columns.ts';
import {
  countOf,
  listOf,
  NotChecked,
  objectOf,
  oneOf,
  Rejection,
  stringIntegerOf,
  type Json,
  type JsonObject,
} from './reading.ts';
import type { CheckTree } from './tree.ts';

export interface CheckedExclusion {
  readonly dimension: number | null;
  readonly ground: string;
}

const GROUNDS = ['dimension', 'determinant', 'hilbert', 'column', 'exhaustion'] as const;
const METHODS = ['rows', 'columns', 'frames'] as const;

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
  const extra =
    ground === 'hilbert'
      ? ['primes']
      : ground === 'column'
        ? ['basis', 'vectors', 'spanned']
        : ground === 'exhaustion'
          ? ['tree']
          : [];
  const o = objectOf(value, place, ['dimension', 'ground', ...extra]);
  const dimension = o['dimension'] === null ? null : countOf(o['dimension'], `${place}/dimension`);
  if (ground === 'exhaustion') {
    const tree = readTree(lattice, o['tree'], `${place}/tree`);
    checkWidth(tree, dimension, `${place}/tree/dimension`);
    if (tree.orbits !== 0n) throw new Rejection(`${place}/tree/orbits`, 'an exclusion has no orbit');
    trees.push(tree);
    return { dimension, ground };
  }
  if (ground === 'column') {
    checkColumnGround(lattice, dimension, o, place);
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

/** The admissible columns do not span: they are listed again. */
function checkColumnGround(lattice: CheckedLattice, n: number | null, o: JsonObject, place: string): void {
  const { rank } = lattice;
  if (rank === 0 || (n !== null && n < rank)) throw new Rejection(place, 'the ground column speaks at n ≥ rank > 0');
  const form = dualForm(readWorkingGram(lattice, o['basis'], `${place}/basis`));
  const columns = listColumns(form, n === rank ? 'unit' : 'all');
  const vectors = stringIntegerOf(o['vectors'], `${place}/vectors`);
  if (vectors !== BigInt(columns.admissible))
    throw new Rejection(`${place}/vectors`, `${columns.admissible} were enumerated, ${vectors} are claimed`);
  const spanned = countOf(o['spanned'], `${place}/spanned`);
  const found = spanOf(form, columns);
  if (found >= rank) throw new Rejection(place, 'the admissible columns span');
  if (spanned !== found) throw new Rejection(`${place}/spanned`, `expected ${found}`);
}

/** The tree of another method that says the same as the first, or null. */
export function checkSecondTree(
  lattice: CheckedLattice,
  value: Json | undefined,
  first: CheckTree | undefined,
  place: string,
): CheckTree | null {
  if (value === null) return null;
  const tree = readTree(lattice, value, place);
  if (first === undefined) throw new Rejection(place, 'expected null: no tree carries the claim');
  if (tree.method === first.method) throw new Rejection(`${place}/method`, 'expected another method');
  const every = isForEvery(first);
  if (every ? !isForEvery(tree) : tree.dimension !== first.dimension)
    throw new Rejection(`${place}/dimension`, 'expected that of the first tree');
  if (tree.orbits !== first.orbits) throw new Rejection(`${place}/orbits`, `expected ${first.orbits}`);
  return tree;
}

/** Does the tree list the embeddings in every Z^n: columns of any number, rows at n of at least the trace (rule A)? */
function isForEvery(tree: CheckTree): boolean {
  const trace = tree.gram.reduce((sum, row, i) => sum + row[i]!, 0n);
  return tree.dimension === null || (tree.method === 'rows' && BigInt(tree.dimension) >= trace);
}

function checkWidth(tree: CheckTree, dimension: number | null, place: string): void {
  if (dimension !== null && tree.dimension !== dimension) throw new Rejection(place, `expected ${dimension}`);
  if (dimension === null && !isForEvery(tree)) throw new Rejection(place, 'expected at least the trace, or null');
}

function readTree(lattice: CheckedLattice, value: Json | undefined, place: string): CheckTree {
  const name = (value as { method?: Json } | null)?.method;
  if (typeof name === 'string' && !(METHODS as readonly string[]).includes(name))
    throw new NotChecked(`the method ${JSON.stringify(name)} is not known here`);
  const method = oneOf(name, `${place}/method`, METHODS);
  const glued = method === 'frames' && (value as { revision?: Json }).revision === 2;
  const counted = method === 'rows' ? ['order', 'nodes'] : glued ? ['primes', 'glued'] : ['vectors'];
  const o = objectOf(value, place, ['method', 'revision', 'dimension', 'basis', ...counted, 'orbits']);
  const revision = countOf(o['revision'], `${place}/revision`);
  if (revision !== 1 && !(revision === 2 && (glued || method === 'rows')))
    throw new NotChecked(`revision ${String(o['revision'])} of the method ${method} is not known here`);
  const dimension =
    method === 'columns' && o['dimension'] === null ? null : countOf(o['dimension'], `${place}/dimension`);
  const working = readWorkingGram(lattice, o['basis'], `${place}/basis`);
  const orbits = stringIntegerOf(o['orbits'], `${place}/orbits`);
  if (method === 'rows') {
    const order = readOrder(lattice.rank, o['order'], `${place}/order`);
    const nodes = stringIntegerOf(o['nodes'], `${place}/nodes`);
    const gram = order.map((v) => order.map((w) => working[v]![w]!));
    return { place, method, dimension, gram, ...(revision === 2 ? { chosen: true } : {}), nodes, orbits };
  }
  const excess = dimension === null ? null : dimension - lattice.rank;
  if (method === 'frames' && (excess === null || excess < 0 || excess > (glued ? 1 : 2)))
    throw new Rejection(
      `${place}/dimension`,
      'frames are for n = rank, rank + 1, rank + 2; by gluing for the first two',
    );
  return {
    place,
    method,
    dimension,
    gram: working,
    ...(glued ? { primes: readPrimes(lattice.determinant, o['primes'], `${place}/primes`) } : {}),
    nodes: glued ? stringIntegerOf(o['glued'], `${place}/glued`) : stringIntegerOf(o['vectors'], `${place}/vectors`),
    orbits,
  };
}

/** All primes of d, ascending, each proved prime. */
function readPrimes(d: bigint, value: Json | undefined, place: string): bigint[] {
  const primes = listOf(value, place).map((p, i) => stringIntegerOf(p, `${place}/${i}`));
  let rest = d;
  primes.forEach((p, i) => {
    if (i > 0 && p <= primes[i - 1]!) throw new Rejection(`${place}/${i}`, 'not ascending');
    if (p >= PRIME_BOUND || !isPrime(p))
      throw new Rejection(`${place}/${i}`, `${p} is not a prime below ${PRIME_BOUND}`);
    if (rest % p !== 0n) throw new Rejection(`${place}/${i}`, `${p} does not divide the determinant`);
    while (rest % p === 0n) rest /= p;
  });
  if (rest !== 1n) throw new Rejection(place, `the primes leave ${rest} of the determinant`);
  return primes;
}

function readOrder(rank: number, value: Json | undefined, place: string): number[] {
  const order = listOf(value, place).map((w, i) => countOf(w, `${place}/${i}`));
  if (order.length !== rank || new Set(order).size !== rank || order.some((w) => w >= rank))
    throw new Rejection(place, `expected a permutation of ${rank} rows`);
  return order;
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
