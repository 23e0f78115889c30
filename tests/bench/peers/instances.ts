/**
 * The instances of bench:peers and bench:scale, from a fixed seed; every one is a question document. Existence instances
 * ask for one embedding. "made" ones embed by construction; "drawn" and "heavy" ones are the first drawn that the
 * arithmetic grounds (determinant, Hilbert symbols) do not settle, and whether they embed is found by the runs themselves.
 */
import { arithmeticGround, buildLattice, type Source } from '@palmette/lattice';
import { chainOfSquareDeterminant, randomChain, squareChain } from './chain-weights.ts';
import { chainOf, legOfTotal, scrambledForm, starOf, unimodular } from './instance-sources.ts';
import { seededRandom, type Random } from './random.ts';

export type Drawn = 'chain' | 'star' | 'scrambled';
export type Making = 'made' | 'drawn' | 'heavy';
export type InstanceClass = Drawn | 'list';
export interface Instance {
  readonly name: string;
  readonly class: InstanceClass;
  readonly rank: number;
  /** n − r. */
  readonly excess: number;
  readonly document: {
    readonly format: string;
    readonly source: Source;
    readonly target: { readonly excess: number };
    readonly scope: 'one' | 'all';
  };
}

const EXCESSES = [0, 1, 2] as const;
/** Peers are run at these; the growth table of bench:scale has its own. */
const RANKS = { chain: [14, 20, 28, 36], star: [18, 24, 30, 36], scrambled: [10, 12, 14] } as const;
const HEAVY_RANKS = { chain: [14, 20, 28], star: [18, 24, 30], scrambled: [10, 12, 14] } as const;

export function instance(
  name: string,
  of: { class: InstanceClass; rank: number; excess: number; source: Source; scope: 'one' | 'all' },
): Instance {
  const { source, excess, scope, ...rest } = of;
  return { name, ...rest, excess, document: { format: 'palmette.question/1', source, target: { excess }, scope } };
}

/**
 * The chain, star or scrambled form of a rank. `made` embeds in Z^(rank + excess); `drawn` and `heavy` pass the arithmetic
 * grounds, `heavy` with weights 3 to 5 (matrix entries −2..2), where there are many more candidates for a column. `variant`
 * counts instances of the same kind.
 */
export function drawSource(kind: Drawn, rank: number, excess: number, how: Making, variant = 0): Source {
  const seed = ((rank * 8 + excess) * 2 + Number(how === 'made')) * 4 + kind.length;
  const random = seededRandom(seed + variant * 2 ** 20 + Number(how === 'heavy') * 2 ** 19);
  const draw = { chain: drawChain, star: drawStar, scrambled: drawScrambled }[kind];
  for (;;) {
    const source = draw(rank, excess, how, random);
    if (how === 'made' || arithmeticGround(buildLattice(source), rank + excess) === null) return source;
  }
}

/** A chain of rank r + k that embeds in its rank, without its last k vertices, embeds in Z^(r + k). */
function chainWeights(rank: number, excess: number, how: Making, random: Random): number[] {
  if (how === 'made') return squareChain(rank + excess, random).slice(0, rank);
  if (how === 'heavy') return Array.from({ length: rank }, () => random.pick([3, 3, 4, 4, 5]));
  return excess === 0 ? chainOfSquareDeterminant(rank, random) : randomChain(rank, random);
}

function drawChain(rank: number, excess: number, how: Making, random: Random): Source {
  return chainOf(chainWeights(rank, excess, how, random));
}

function drawStar(rank: number, excess: number, how: Making, random: Random): Source {
  const legs = Math.floor(rank / 2);
  return starOf(legOfTotal(legs, random), chainWeights(rank - legs, excess, how, random));
}

function drawScrambled(rank: number, excess: number, how: Making, random: Random): Source {
  return scrambledForm(rank, unimodular(rank + excess, how !== 'made'), how === 'heavy' ? 2 : 1, random);
}

export function existenceInstances(): Instance[] {
  const list: Instance[] = [];
  for (const kind of ['chain', 'star', 'scrambled'] as const)
    for (const excess of EXCESSES)
      for (const how of ['made', 'drawn', 'heavy'] as const)
        for (const rank of how === 'heavy' ? HEAVY_RANKS[kind] : RANKS[kind]) {
          // a heavy chain with a determinant that is a square is too rare to draw
          if (how === 'heavy' && excess === 0 && kind !== 'scrambled') continue;
          const source = drawSource(kind, rank, excess, how);
          const name = `${kind} ${rank} +${excess} ${how}`;
          list.push(instance(name, { class: kind, rank, excess, source, scope: 'one' }));
        }
  return list;
}

const repeated = (weight: number, times: number) => chainOf(Array.from({ length: times }, () => weight));
const norms = (...list: number[]): Source => ({
  kind: 'sum',
  of: list.map((m) => ({ kind: 'matrix', rows: [[m]] }) as const),
});

/** Complete lists, from a handful of orbits to thousands. */
export function listInstances(): Instance[] {
  const twiceE8: Source = { kind: 'matrix', rows: unimodular(8, true).map((row) => row.map((x) => 2 * x)) };
  const list: [string, Source, number, number][] = [
    ['chain [4]^12', repeated(4, 12), 12, 2],
    ['chain [5]^9', repeated(5, 9), 9, 2],
    ['chain [4]^8', repeated(4, 8), 8, 3],
    ['chain [4]^10', repeated(4, 10), 10, 3],
    ['three chains [5,5,5]', { kind: 'sum', of: [1, 2, 3].map(() => repeated(5, 3)) }, 9, 2],
    ['⟨17⟩ + ⟨18⟩ + ⟨20⟩', norms(17, 18, 20), 3, 5],
    ['⟨21⟩ + ⟨22⟩ + ⟨23⟩', norms(21, 22, 23), 3, 5],
    ['√2·E8', twiceE8, 8, 0],
    ['scrambled 8', scrambledForm(8, unimodular(10, false), 1, seededRandom(8)), 8, 2],
    ['scrambled 9', scrambledForm(9, unimodular(10, false), 2, seededRandom(9)), 9, 1],
    ['scrambled 8', scrambledForm(8, unimodular(11, false), 1, seededRandom(11)), 8, 3],
    ['scrambled 10', scrambledForm(10, unimodular(12, false), 1, seededRandom(12)), 10, 2],
    ['chain 16', drawSource('chain', 16, 3, 'made'), 16, 3],
    ['star 18', drawSource('star', 18, 3, 'made'), 18, 3],
  ];
  return list.map(([name, source, rank, excess]) =>
    instance(`${name} +${excess} all`, { class: 'list', rank, excess, source, scope: 'all' }),
  );
}
