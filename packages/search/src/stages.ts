/**
 * The stages of a search: which tree comes next, given what the finished ones showed. Pure: the same results, the
 * same next step.
 *
 * dimension, excess: one tree. any: one tree at n = trace of the working Gram, which holds every embedding (rule A of
 * FORMAT.md). least: n = rank, rank + 1, … in turn, skipping what arithmetic excludes, until a tree shows an embedding;
 * after rank + 3 an existence tree at the bound, so that a lattice that embeds nowhere comes to an end.
 */
import type { Method } from './method.ts';
import { planGram, type Plan } from './plan.ts';
import { withSecondOpinion } from './second-opinion.ts';

export interface Stage {
  readonly no: number;
  readonly dimension: number;
  /** `one` stops at the first embedding. */
  readonly purpose: 'one' | 'all';
  /** An empty tree proves that no Z^n holds the lattice (n is at least the trace). */
  readonly whole: boolean;
  /** `nextStep` proposes the one that the plan forces, or rows; the chooser settles it. */
  readonly method: Method;
  /** Frames by gluing, not from a list of columns. */
  readonly glue?: true;
  /** Rows: the next one is chosen at each node, not taken from the plan's order. */
  readonly fewest?: true;
  /** One sentence: what was chosen and why. */
  readonly why: string;
  /** Repeats an earlier stage by another method: its number. */
  readonly repeats?: number;
}

export interface StageResult extends Stage {
  /** The whole tree was searched (false where `one` stopped at an embedding). */
  readonly complete: boolean;
  readonly nodes: string;
  readonly orbits: string;
  /** The set of its orbits as `OrbitSet` writes it; kept where a second opinion was asked for. */
  readonly set?: string;
}

/** What arithmetic says against Z^n (null: against every n); the shape of lattice's ground, carried through untouched. */
export type Arithmetic<G> = (n: number | null) => G | null;

export interface Conclusion<G = ArithmeticGroundLike> {
  readonly verdict: 'embeds' | 'excluded';
  /** Null: target any, or excluded from every Z^n. */
  readonly dimension: number | null;
  readonly complete: boolean;
  /** What excludes: the claim's dimension for `excluded`, n − 1 for a least n. Null where nothing has to be excluded. */
  readonly exclusion: null | { readonly dimension: number | null; readonly arithmetic?: G; readonly stage?: number };
  /** Stage whose orbits are the list or the witness. */
  readonly listStage: number | null;
  readonly listComplete: boolean;
  /** Stage that says the same by another method, where a second opinion was asked for. */
  readonly secondStage?: number;
}

export type ArithmeticGroundLike =
  | { readonly ground: 'dimension' }
  | { readonly ground: 'determinant' }
  | { readonly ground: 'hilbert'; readonly primes: string[] }
  | { readonly ground: 'column'; readonly vectors: string; readonly spanned: number };

export type Step = { readonly stage: Stage } | { readonly conclusion: Conclusion };

/** Dimensions above the rank that are tried before an existence tree at the bound is run (Mordell 1930, Ko 1937: rank ≤ 5 needs no more). */
const TRIED_FIRST = 3;

/** Trace of the working Gram: no embedding has more nonzero columns. */
export function traceOf(plan: Plan): number {
  const gram = planGram(plan);
  const trace = gram.reduce((sum, row, i) => sum + row[i]!, 0n);
  if (trace > BigInt(Number.MAX_SAFE_INTEGER))
    throw new RangeError(`the trace ${trace} is too big for a tree that holds every embedding`);
  return Number(trace);
}

export function nextStep(
  plan: Plan,
  results: readonly StageResult[],
  arithmetic: Arithmetic<ArithmeticGroundLike>,
): Step {
  const first = firstOpinion(
    plan,
    results.filter((r) => r.repeats === undefined),
    arithmetic,
  );
  return 'conclusion' in first && plan.secondOpinion ? withSecondOpinion(plan, first.conclusion, results) : first;
}

function firstOpinion(plan: Plan, results: readonly StageResult[], arithmetic: Arithmetic<ArithmeticGroundLike>): Step {
  const { target } = plan;
  if ('dimension' in target) return fixed(plan, target.dimension, results, arithmetic);
  if ('excess' in target) return fixed(plan, plan.order.length + target.excess, results, arithmetic);
  const nowhere = arithmetic(null);
  if (nowhere !== null) return excluded(null, { dimension: null, arithmetic: nowhere });
  if ('any' in target) return anyDimension(plan, results);
  return least(plan, target.least.upTo, results, arithmetic);
}

function fixed(
  plan: Plan,
  n: number,
  results: readonly StageResult[],
  arithmetic: Arithmetic<ArithmeticGroundLike>,
): Step {
  const ground = arithmetic(n);
  if (ground !== null) return excluded(n, { dimension: n, arithmetic: ground });
  const [result] = results;
  if (result === undefined) return { stage: { ...proposed(plan, n), no: 0, purpose: plan.scope } };
  return result.orbits === '0' ? excluded(n, { dimension: n, stage: 0 }) : embeds(n, result, null);
}

function anyDimension(plan: Plan, results: readonly StageResult[]): Step {
  const [result] = results;
  if (result === undefined)
    return { stage: { ...proposed(plan, traceOf(plan)), no: 0, purpose: plan.scope, whole: true } };
  return result.orbits === '0' ? excluded(null, { dimension: null, stage: 0 }) : embeds(null, result, null);
}

function least(
  plan: Plan,
  upTo: number | undefined,
  results: readonly StageResult[],
  arithmetic: Arithmetic<ArithmeticGroundLike>,
): Step {
  const rank = plan.order.length;
  const trace = traceOf(plan);
  const whole = upTo === undefined || upTo >= trace;
  const bound = Math.min(upTo ?? trace, trace);
  const atBound = results.find((r) => r.dimension === bound);
  const nowhere = (stage: number): Step =>
    whole ? excluded(null, { dimension: null, stage }) : excluded(upTo!, { dimension: upTo!, stage });
  if (atBound?.orbits === '0') return nowhere(atBound.no);
  for (let n = rank; n <= bound; n += 1) {
    const tried = results.find((r) => r.dimension === n && r.purpose === plan.scope);
    if (tried !== undefined) {
      if (tried.orbits !== '0') return embeds(n, tried, below(n, rank, results, arithmetic));
      continue;
    }
    if (arithmetic(n) !== null) continue;
    const existence = atBound === undefined && n > rank + TRIED_FIRST && n < bound;
    return {
      stage: {
        ...proposed(plan, existence ? bound : n),
        no: results.length,
        purpose: existence ? 'one' : plan.scope,
        whole: (existence || n === bound) && whole,
      },
    };
  }
  const ground = arithmetic(bound);
  if (ground === null) throw new Error(`the stages of a least search do not end: bound ${bound}`);
  return excluded(whole ? null : upTo!, { dimension: whole ? null : upTo!, arithmetic: ground });
}

function proposed(plan: Plan, dimension: number): Stage {
  return { no: 0, dimension, purpose: 'all', whole: false, method: plan.forced ?? 'rows', why: '' };
}

/** What excludes n − 1: its tree, or arithmetic. */
function below(
  n: number,
  rank: number,
  results: readonly StageResult[],
  arithmetic: Arithmetic<ArithmeticGroundLike>,
): Conclusion['exclusion'] {
  if (n === 0) return null;
  const tree = results.find((r) => r.dimension === n - 1 && r.orbits === '0');
  if (tree !== undefined) return { dimension: n - 1, stage: tree.no };
  const ground = n - 1 < rank ? ({ ground: 'dimension' } as const) : arithmetic(n - 1);
  if (ground === null) throw new Error(`nothing excludes n = ${n - 1}`);
  return { dimension: n - 1, arithmetic: ground };
}

function excluded(dimension: number | null, exclusion: NonNullable<Conclusion['exclusion']>): Step {
  return {
    conclusion: { verdict: 'excluded', dimension, complete: true, exclusion, listStage: null, listComplete: true },
  };
}

function embeds(dimension: number | null, list: StageResult, exclusion: Conclusion['exclusion']): Step {
  return {
    conclusion: {
      verdict: 'embeds',
      dimension,
      complete: list.complete,
      exclusion,
      listStage: list.no,
      listComplete: list.complete && list.purpose === 'all',
    },
  };
}
