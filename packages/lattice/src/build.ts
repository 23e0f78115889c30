/** From a source to its lattice: the positive form, what its radical is, and what was done to the input. */
import {
  determinant,
  eliminateSymmetric,
  gcd,
  multiply,
  rationalKernel,
  splitOff,
  transpose,
  type BigMatrix,
  type Elimination,
} from '@palmette/exact';
import { diagramForm } from './source-diagram.ts';
import { graphForm } from './source-graph.ts';
import { hirzebruchJung } from './hirzebruch-jung.ts';
import { chainGraph, plumbingForm } from './plumbing.ts';
import { montesinosForm, seifertForm } from './source-star.ts';
import { treeForm } from './source-tree.ts';
import {
  MAX_RANK,
  SourceFault,
  type BuiltForm,
  type FractionSource,
  type MatrixSource,
  type Plumbing,
  type Source,
  type SumSource,
} from './source.ts';

export interface Lattice {
  readonly sign: 1 | -1;
  readonly orientation?: 'entered' | 'reversed';
  /** The positive form as built from the source, N × N with N = rank + nullity. */
  readonly gram: BigMatrix;
  readonly rank: number;
  readonly nullity: number;
  /** Of the reduced lattice Z^N/radical; 1 at rank 0. */
  readonly determinant: bigint;
  /** A basis of all integer vectors v with gram·v = 0, as rows. */
  readonly radical: BigMatrix;
  readonly names: readonly string[];
  /** For drawing, with the weights as entered; null where the source is no plumbing. */
  readonly graph: Plumbing | null;
  readonly remarks: readonly string[];
}

export interface ReducedBasis {
  /** Null is the identity (nullity 0). Otherwise matrix·inverse = 1 and matrixᵀ·gram·matrix = reduced ⊕ 0. */
  readonly basis: { readonly matrix: BigMatrix; readonly inverse: BigMatrix } | null;
  /** r × r, positive definite. */
  readonly gram: BigMatrix;
}

const reducedBases = new WeakMap<Lattice, ReducedBasis>();

/**
 * Builds the lattice of a source. Conventions: MATHEMATICS of the product and FORMAT.md, section 3.
 * @throws SourceFault with a place inside the source, what was expected and what was found
 */
export function buildLattice(source: Source): Lattice {
  const built = buildForm(source);
  if (built.form.length > MAX_RANK)
    throw new SourceFault('', `expected at most ${MAX_RANK} rows, found ${built.form.length}`, 'limit');
  const elimination = eliminateSymmetric(built.form);
  if (elimination.positive > 0 && elimination.negative > 0) {
    throw new SourceFault(
      '',
      `expected a definite or semidefinite form, found an indefinite one of signature (${elimination.positive}, ${elimination.negative})${elimination.zero > 0 ? ` and nullity ${elimination.zero}` : ''}`,
    );
  }
  const sign = elimination.negative > 0 ? -1 : 1;
  const gram = sign === 1 ? built.form : built.form.map((row) => row.map((x) => -x));
  const reduced = reduce(gram, elimination);
  const lattice: Lattice = {
    sign,
    ...(built.orientation === undefined ? {} : { orientation: built.orientation }),
    gram,
    rank: gram.length - elimination.zero,
    nullity: elimination.zero,
    determinant: elimination.zero === 0 ? pivotProduct(elimination) : positiveDeterminant(reduced.gram),
    radical: reduced.basis === null ? [] : transpose(reduced.basis.matrix).slice(gram.length - elimination.zero),
    names: built.names,
    graph: built.graph,
    remarks: built.remarks,
  };
  reducedBases.set(lattice, reduced);
  return lattice;
}

/** The reduced lattice Z^N/radical in a basis of its own. */
export function reducedBasis(lattice: Lattice): ReducedBasis {
  return reducedBases.get(lattice) ?? reduce(lattice.gram, eliminateSymmetric(lattice.gram));
}

function reduce(gram: BigMatrix, elimination: Elimination): ReducedBasis {
  if (elimination.zero === 0) return { basis: null, gram };
  const rank = gram.length - elimination.zero;
  const basis = splitOff(rationalKernel(elimination, gram.length), gram.length);
  const columns = transpose(basis.matrix).slice(0, rank);
  return { basis, gram: multiply(columns, multiply(gram, transpose(columns))) };
}

/** |product of the pivots|, kept as one fraction that ends up an integer. */
function pivotProduct(elimination: Elimination): bigint {
  let [n, d] = [1n, 1n];
  for (const pivot of elimination.pivots) {
    n *= pivot.n;
    d *= pivot.d;
    const common = gcd(n, d);
    n /= common;
    d /= common;
  }
  return n / d;
}

function positiveDeterminant(gram: BigMatrix): bigint {
  return gram.length <= 60 ? determinant(gram) : pivotProduct(eliminateSymmetric(gram));
}

function buildForm(source: Source): BuiltForm {
  switch (source.kind) {
    case 'matrix':
      return matrixForm(source);
    case 'tree':
      return treeForm(source);
    case 'fraction':
      return fractionForm(source);
    case 'seifert':
      return seifertForm(source);
    case 'montesinos':
      return montesinosForm(source);
    case 'diagram':
      return diagramForm(source);
    case 'graph':
      return graphForm(source);
    case 'sum':
      return sumForm(source);
  }
}

function matrixForm(source: MatrixSource): BuiltForm {
  const form = source.rows.map((row, i) => {
    if (row.length !== source.rows.length)
      throw new SourceFault(`/rows/${i}`, `row ${i + 1} has ${row.length} entries, expected ${source.rows.length}`);
    return row.map(BigInt);
  });
  form.forEach((row, i) =>
    row.forEach((x, j) => {
      if (j < i && x !== form[j]![i]) {
        throw new SourceFault(
          `/rows/${i}/${j}`,
          `expected a symmetric matrix, found ${x} in row ${i + 1}, entry ${j + 1} and ${form[j]![i]} in row ${j + 1}, entry ${i + 1}`,
        );
      }
    }),
  );
  return { form, names: form.map((_, i) => `v${i + 1}`), graph: null, remarks: [] };
}

function fractionForm(source: FractionSource): BuiltForm {
  const [p, q] = [BigInt(source.p), BigInt(source.q)];
  if (p === 1n && q === 0n)
    return { form: [], names: [], graph: { vertices: [], edges: [] }, remarks: ['1/0 is the 3-sphere: rank 0.'] };
  if (p <= 1n) throw new SourceFault('/p', `expected p > q > 0, or p = 1 with q = 0, found p = ${p}`);
  if (q <= 0n || q >= p) throw new SourceFault('/q', `expected 0 < q < p = ${p}, found q = ${q}`);
  const common = gcd(p, q);
  if (common !== 1n)
    throw new SourceFault('/q', `expected p and q without common factor, found ${p}/${q} with ${common}`);
  const entries = hirzebruchJung(p, source.orientation === 'dual' ? p - q : q);
  const read = source.orientation === 'dual' ? `${p}/${p - q}` : `${p}/${q}`;
  return plumbingForm(chainGraph(entries.map((a) => -a)), [`${read} = [${entries.join(', ')}]`]);
}

function sumForm(source: SumSource): BuiltForm {
  const parts = source.of.map((part, k) => {
    try {
      const built = buildForm(part);
      const { positive, negative } = eliminateSymmetric(built.form);
      if (positive > 0 && negative > 0)
        throw new SourceFault(
          '',
          `expected a definite or semidefinite form, found an indefinite one of signature (${positive}, ${negative})`,
        );
      return { built, sign: positive > 0 ? 1 : negative > 0 ? -1 : 0 };
    } catch (error) {
      if (error instanceof SourceFault) throw new SourceFault(`/of/${k}${error.path}`, error.message, error.code);
      throw error;
    }
  });
  const first = parts.find((part) => part.sign !== 0);
  const other = parts.findIndex((part) => part.sign !== 0 && part.sign !== first!.sign);
  if (other >= 0)
    throw new SourceFault(
      `/of/${other}`,
      `expected summands of one sign, found a ${first!.sign < 0 ? 'positive' : 'negative'} one after a ${first!.sign < 0 ? 'negative' : 'positive'} one`,
    );
  const size = parts.reduce((sum, { built }) => sum + built.form.length, 0);
  if (size > MAX_RANK) throw new SourceFault('/of', `expected at most ${MAX_RANK} rows in all, found ${size}`, 'limit');
  const drawable = parts.every(({ built }) => built.graph !== null);
  const vertices: { name: string; weight: bigint }[] = [];
  const edges: [number, number, 1 | -1][] = [];
  const form: bigint[][] = [];
  const names: string[] = [];
  parts.forEach(({ built }, k) => {
    const offset = names.length;
    for (const row of built.form)
      form.push([
        ...new Array<bigint>(offset).fill(0n),
        ...row,
        ...new Array<bigint>(size - offset - row.length).fill(0n),
      ]);
    names.push(...built.names.map((name) => `${k + 1}:${name}`));
    built.graph?.vertices.forEach((v) => vertices.push({ name: `${k + 1}:${v.name}`, weight: v.weight }));
    built.graph?.edges.forEach(([i, j, s]) => edges.push([i + offset, j + offset, s]));
  });
  return {
    form,
    names,
    graph: drawable ? { vertices, edges } : null,
    remarks: parts.flatMap(({ built }, k) => built.remarks.map((r) => `Summand ${k + 1}: ${r}`)),
  };
}
