/**
 * What a lattice verdict may mean for spaces and links. A statement stands here only if it follows from Donaldson's
 * theorem by the short argument written beside it; for everything else there is no rule of ours. A line speaks only when
 * its boxes are ticked, because the hypotheses are nothing that a program can see in a matrix.
 *
 * Donaldson, The orientation of Yang–Mills moduli spaces and 4-manifold topology, J. Differential Geom. 26 (1987): the
 * intersection form of a closed, oriented, smooth, definite 4-manifold is diagonal over Z (modulo torsion).
 *
 * The argument. Let X be a smooth definite filling of Y with form Λ of rank r, and nullity 0, so that Y is a rational
 * homology sphere. If Y bounds a rational homology ball W, then X ∪ −W is closed, smooth and definite of rank r, hence
 * has the form ±Z^r, and H_2(X) modulo torsion goes into it preserving the form. So Λ embeds in Z^r. Excluded at
 * n = r (or at a larger n, which says more), there is no such W.
 */
import type { Source, Target, Verdict } from '@palmette/contracts';
import { integerInWords } from './numbers.ts';
import { space } from './places.ts';

export interface ConsequenceFacts {
  readonly sourceKind: Source['kind'];
  readonly verdict: Verdict;
  readonly complete: boolean;
  readonly target: Target;
  /** Of the claim; null with `excluded` says “in no Z^n”. */
  readonly dimension: number | null;
  /** Of the reduced lattice. */
  readonly rank: number;
  readonly nullity: number;
  /** Of the reduced lattice, decimal. */
  readonly determinant: string;
  readonly orientation?: 'entered' | 'reversed' | undefined;
}

export interface Box {
  readonly id: string;
  readonly label: string;
}

export interface Consequence {
  readonly id: string;
  /** “Y bounds a rational homology ball”. */
  readonly property: string;
  /** What the line says once every box is ticked. */
  readonly outcome: 'obstructed' | 'open';
  /** Empty where there is nothing to confirm, since nothing is claimed. */
  readonly boxes: readonly Box[];
  /** Theorem and year, for the line's end. */
  readonly theorem: string;
  /** The whole sentence, with theorem, hypotheses and who confirms them; for an open line, why it is open. */
  readonly sentence: string;
}

const SMOOTH: Box = { id: 'smooth', label: 'smooth category' };
const CONFIRM = 'You confirm this; Palmette cannot see it.';

/** Sources whose boundary is the double branched cover of a link that the source names. */
const LINK_SOURCES: readonly Source['kind'][] = ['fraction', 'montesinos', 'diagram'];

/** True if the verdict says that Λ does not embed in Z^r, r its rank. */
export function excludedAtRank(facts: ConsequenceFacts): boolean {
  if (facts.verdict === 'excluded') return facts.dimension === null || facts.dimension >= facts.rank;
  return (
    facts.verdict === 'embeds' && 'least' in facts.target && facts.dimension !== null && facts.dimension > facts.rank
  );
}

/** The lines of “What it may mean”, in order. Empty if the verdict is open. */
export function consequences(facts: ConsequenceFacts): readonly Consequence[] {
  if (facts.verdict === 'open') return [];
  const lines = [rationalBall(facts)];
  if (LINK_SOURCES.includes(facts.sourceKind)) lines.push(isKnot(facts) ? sliceKnot(facts) : chiSliceLink(facts));
  return lines;
}

function rationalBall(facts: ConsequenceFacts): Consequence {
  const property = 'Y bounds a rational homology ball';
  const why = silence(facts);
  if (why !== null) return open('ball', property, why);
  return {
    id: 'ball',
    property,
    outcome: 'obstructed',
    boxes: [SMOOTH, filling(facts)],
    theorem: 'Donaldson 1987; n = rank',
    sentence: `The lattice is excluded at n = rank, ${space(facts.rank)}. By Donaldson's theorem Y bounds no rational homology ball, provided that Y is the boundary of a smooth ${facts.sourceKind === 'matrix' || facts.sourceKind === 'graph' ? 'definite 4-manifold with this form' : 'filling as entered'} and the smooth category is meant. ${CONFIRM}`,
  };
}

function sliceKnot(facts: ConsequenceFacts): Consequence {
  const property = 'the knot is slice';
  const why = silence(facts);
  if (why !== null) return open('slice', property, why);
  return {
    id: 'slice',
    property,
    outcome: 'obstructed',
    boxes: [SMOOTH, { id: 'cover', label: 'the knot is the one entered' }],
    theorem: 'Donaldson 1987 on the double branched cover',
    sentence: `The lattice is excluded at n = rank, ${space(facts.rank)}. The double branched cover of a slice knot bounds a rational homology ball (Casson–Gordon 1978), and by Donaldson's theorem this one bounds none; so the knot is not smoothly slice, provided that the source describes your knot. ${CONFIRM}`,
  };
}

function chiSliceLink(facts: ConsequenceFacts): Consequence {
  const property = 'the link bounds a surface of Euler characteristic 1 without closed components in the 4-ball';
  const why = silence(facts);
  if (why !== null) return open('chi-slice', property, why);
  return {
    id: 'chi-slice',
    property,
    outcome: 'obstructed',
    boxes: [SMOOTH, { id: 'cover', label: 'the link is the one entered' }],
    theorem: 'Donaldson 1987; Donald–Owens 2012',
    sentence: `The lattice is excluded at n = rank, ${space(facts.rank)}, and the determinant ${integerInWords(facts.determinant)} is not 0. The double branched cover over such a surface would be a rational homology ball (Donald–Owens 2012), and by Donaldson's theorem there is none, provided that the source describes your link and the surface is smooth and properly embedded. ${CONFIRM}`,
  };
}

function filling(facts: ConsequenceFacts): Box {
  if (facts.sourceKind === 'matrix' || facts.sourceKind === 'graph') {
    return { id: 'filling', label: 'Y bounds a smooth definite 4-manifold with this form' };
  }
  return {
    id: 'filling',
    label: facts.orientation === 'reversed' ? 'Y as entered; the filling is of −Y' : 'Y as entered',
  };
}

/** Why nothing follows at n = rank, or null if something does. */
function silence(facts: ConsequenceFacts): string | null {
  if (facts.rank === 0) return 'The lattice is zero: there is nothing to obstruct.';
  if (facts.nullity > 0) return 'The form has a radical, so Y is no rational homology sphere: no rule of ours applies.';
  if (excludedAtRank(facts)) return null;
  if (facts.verdict === 'embeds' && facts.dimension !== null && facts.dimension <= facts.rank) {
    return 'The lattice embeds at n = rank, so this theorem obstructs nothing. That proves nothing either way.';
  }
  return 'This verdict says nothing about n = rank: no rule of ours applies.';
}

function open(id: string, property: string, sentence: string): Consequence {
  return { id, property, outcome: 'open', boxes: [], theorem: '', sentence };
}

/** The determinant of a knot is odd, that of a link of several components even; with a radical it is 0. */
function isKnot(facts: ConsequenceFacts): boolean {
  return facts.nullity === 0 && '13579'.includes(facts.determinant.at(-1) ?? '0');
}
