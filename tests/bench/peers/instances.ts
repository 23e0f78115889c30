/**
 * The instances of bench:peers and bench:scale, from a fixed seed; every one is a question document. Existence instances
 * ask for one embedding. "made" ones embed by construction; "drawn" ones are the first drawn that the arithmetic grounds do
 * not settle, and whether they embed is found by the runs themselves.
 */
import { arithmeticGround, buildLattice, type Source } from '@palmette/lattice';
import { chainOfSquareDeterminant, randomChain, squareChain } from './chain-weights.ts';
import { chainOf, legOfTotal, scrambledForm, starOf, unimodular } from './instance-sources.ts';
import { seededRandom, type Random } from './random.ts';

export type InstanceClass = 'chain' | 'star' | 'scrambled' | 'list';
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
  } & {
    readonly scope: 'one' | 'all';
  };
}

const EXCESSES = [0, 1, 2] as const;
/** Peers are run at these; the growth table of bench:scale has its own. */
const RANKS = { chain: [14, 20, 28, 36], star: [18, 24, 30, 36], scrambled: [10, 12, 14] } as const;

export function instance(
  name: string,
  of: { class: InstanceClass; rank: number; excess: number; source: Source; scope: 'one' | 'all' },
): Instance {
  const { source, excess, scope, ...rest } = of;
  return { name, ...rest, excess, document: { format: 'palmette.question/1', source, target: { excess }, scope } };
}

/**
 * The chain, star or scrambled form of a rank: `made` embeds in Z^(rank + excess), `drawn` passes the arithmetic grounds.
 * `variant` counts instances of the same kind.
 */
export function drawSource(
  kind: 'chain' | 'star' | 'scrambled',
  rank: number,
  excess: number,
  made: boolean,
  variant = 0,
): Source {
  const random = seededRandom(((rank * 8 + excess) * 2 + Number(made)) * 4 + kind.length + variant * 2 ** 20);
  const draw = { chain: drawChain, star: drawStar, scrambled: drawScrambled }[kind];
  for (;;) {
    const source = draw(rank, excess, made, random);
    if (made || arithmeticGround(buildLattice(source), rank + excess) === null) return source;
  }
}

/** A chain of rank r + k that embeds in its rank, without its last k vertices, embeds in Z^(r + k). */
function chainWeights(rank: number, excess: number, made: boolean, random: Random): number[] {
  if (made) return squareChain(rank + excess, random).slice(0, rank);
  return excess === 0 ? chainOfSquareDeterminant(rank, random) : randomChain(rank, random);
}

function drawChain(rank: number, excess: number, made: boolean, random: Random): Source {
  return chainOf(chainWeights(rank, excess, made, random));
}

function drawStar(rank: number, excess: number, made: boolean, random: Random): Source {
  const legs = Math.floor(rank / 2);
  return starOf(legOfTotal(legs, random), chainWeights(rank - legs, excess, made, random));
}

function drawScrambled(rank: number, excess: number, made: boolean, random: Random): Source {
  return scrambledForm(rank, unimodular(rank + excess, !made), 1, random);
}

export function existenceInstances(): Instance[] {
  const list: Instance[] = [];
  for (const kind of ['chain', 'star', 'scrambled'] as const)
    for (const excess of EXCESSES)
      for (const rank of RANKS[kind])
        for (const made of [true, false])
          list.push(
            instance(`${kind} ${rank} +${excess} ${made ? 'made' : 'drawn'}`, {
              class: kind,
              rank,
              excess,
              source: drawSource(kind, rank, excess, made),
              scope: 'one',
            }),
          );
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
    ['chain [4]^12', repeated(4, 12), 12, 1],
    ['three chains [5,5,5]', { kind: 'sum', of: [1, 2, 3].map(() => repeated(5, 3)) }, 9, 1],
    ['chain [5]^9', repeated(5, 9), 9, 2],
    ['chain [4]^8', repeated(4, 8), 8, 3],
    ['⟨17⟩ + ⟨18⟩ + ⟨20⟩', norms(17, 18, 20), 3, 5],
    ['√2·E8', twiceE8, 8, 0],
    ['scrambled 8', scrambledForm(8, unimodular(10, false), 1, seededRandom(8)), 8, 2],
    ['scrambled 9', scrambledForm(9, unimodular(10, false), 2, seededRandom(9)), 9, 1],
    ['chain 16', drawSource('chain', 16, 2, true), 16, 2],
    ['star 18', drawSource('star', 18, 2, true), 18, 2],
  ];
  return list.map(([name, source, rank, excess]) =>
    instance(`${name} +${excess} all`, { class: 'list', rank, excess, source, scope: 'all' }),
  );
}
