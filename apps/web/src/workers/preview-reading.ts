/** What a source is read as: lattice, invariants, picture, and the other side of the same object. */
import type { Source } from '@palmette/contracts';
import type { GraphEdge } from '@palmette/drawing';
import { buildLattice, definiteness, SourceFault, sourceLabel, type Lattice } from '@palmette/lattice';
import type { OtherSide, SourceReading } from './preview-messages.ts';

/** Rows up to which the form itself is sent to the page. */
const SHOWN_ROWS = 200;
/** Rows up to which a matrix is drawn as a graph. */
const DRAWN_ROWS = 30;

export function readingOf(source: Source, lattice: Lattice): SourceReading {
  const sign = BigInt(lattice.sign);
  const size = lattice.gram.length;
  return {
    label: sourceLabel(source),
    rank: lattice.rank,
    nullity: lattice.nullity,
    definiteness: definiteness(lattice),
    determinant: lattice.determinant.toString(),
    names: lattice.names,
    weights: lattice.gram.map((row, i) => (row[i]! * sign).toString()),
    edges: edgesOf(lattice, sign),
    form: size <= SHOWN_ROWS ? lattice.gram.map((row) => row.map((x) => (x * sign).toString())) : null,
    remarks: lattice.remarks,
    star: starOf(lattice),
    radical: size <= SHOWN_ROWS ? lattice.radical.map((row) => row.map(String)) : null,
    other: otherSide(source, lattice),
  };
}

function edgesOf(lattice: Lattice, sign: bigint): readonly GraphEdge[] | null {
  if (lattice.graph !== null) return lattice.graph.edges;
  const { gram } = lattice;
  if (gram.length > DRAWN_ROWS) return null;
  const edges: GraphEdge[] = [];
  for (let i = 0; i < gram.length; i += 1) {
    for (let j = i + 1; j < gram.length; j += 1) {
      const value = Number(gram[i]![j]! * sign);
      if (!Number.isSafeInteger(value)) return null;
      if (value !== 0) edges.push([i, j, value]);
    }
  }
  // a graph in which nearly everything is joined says less than the matrix
  return edges.length <= 3 * gram.length ? edges : null;
}

/** “e_0 = −2; legs 3/2, 5/4, 7/1” where one vertex has all the legs and each leg's weights are at most −2. */
export function starOf({ graph }: Lattice): string | null {
  if (graph === null || graph.vertices.length < 4 || graph.edges.some(([, , s]) => s !== 1)) return null;
  const near: number[][] = graph.vertices.map(() => []);
  for (const [a, b] of graph.edges) {
    near[a]!.push(b);
    near[b]!.push(a);
  }
  const centres = near.flatMap((list, v) => (list.length > 2 ? [v] : []));
  const [centre] = centres;
  if (centre === undefined || centres.length > 1 || graph.edges.length !== graph.vertices.length - 1) return null;
  const legs = near[centre]!.map((first) => {
    const weights: bigint[] = [];
    for (let [before, at] = [centre, first]; ;) {
      weights.push(-graph.vertices[at]!.weight);
      const next = near[at]!.find((v) => v !== before);
      if (next === undefined) return weights;
      [before, at] = [at, next];
    }
  });
  if (legs.some((leg) => leg.some((a) => a < 2n))) return null;
  const fractions = legs.map((leg) => {
    let [p, q] = [leg.at(-1)!, 1n];
    for (let i = leg.length - 2; i >= 0; i -= 1) [p, q] = [leg[i]! * p - q, p];
    return `${p}/${q}`;
  });
  const longest = fractions.reduce((sum, text) => sum + text.length, 0);
  if (longest > 200) return null;
  return `e_0 = ${String(graph.vertices[centre]!.weight).replace('-', '−')}; legs ${fractions.join(', ')}`;
}

/** The mirror image, the other chain or the other colouring: with its source if it has a definite lattice too. */
function otherSide(source: Source, lattice: Lattice): OtherSide | null {
  switch (source.kind) {
    case 'fraction': {
      if (lattice.rank === 0) return null;
      const other: Source = { ...source, orientation: source.orientation === 'chain' ? 'dual' : 'chain' };
      const built = buildLattice(other);
      return {
        sentence: `The other orientation is the chain ${built.remarks[0]!.replace(/\.$/, '')}, rank ${built.rank}.`,
        source: other,
      };
    }
    case 'seifert':
    case 'montesinos':
      return tried(
        { ...source, orientation: lattice.orientation === 'reversed' ? 'entered' : 'reversed' },
        'The mirror image',
        'an indefinite star',
      );
    case 'diagram':
      return tried(
        { ...source, colouring: source.colouring === 0 ? 1 : 0 },
        'The other colouring',
        'an indefinite form',
      );
    default:
      return null;
  }
}

function tried(other: Source, name: string, what: string): OtherSide {
  try {
    const built = buildLattice(other);
    const { rank } = built;
    return { sentence: `${name} is ${definiteness(built)} too, rank ${rank}.`, source: other };
  } catch (error) {
    if (!(error instanceof SourceFault)) throw error;
    const signature = /signature (\([^)]*\))/.exec(error.message)?.[1];
    return {
      sentence:
        signature === undefined
          ? `${name} is refused: ${error.message}.`
          : `${name} gives ${what}, signature ${signature}: not offered.`,
    };
  }
}
