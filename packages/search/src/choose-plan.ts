/**
 * Chooses basis and order of the rows for a question: candidates are compared by Knuth's estimate with probes whose seed
 * comes from the question, counted in listing steps and never in seconds, so that everybody gets the same plan.
 */
import { isIdentity, lllGram, type ReadonlyBigMatrix, type Reduction } from '@palmette/exact';
import { estimate, type Estimate } from './estimate.ts';
import type { Method } from './method.ts';
import { candidateOrders } from './order.ts';
import { toPlanMatrix, type Plan, type PlanTarget } from './plan.ts';
import { openRun } from './run.ts';
import { nextStep, type Arithmetic, type ArithmeticGroundLike, type Stage } from './stages.ts';

export interface SearchQuestion {
  /** Reduced Gram matrix, r × r, positive definite. */
  readonly gram: ReadonlyBigMatrix;
  readonly target: PlanTarget;
  readonly scope: 'one' | 'all';
  readonly forced?: Method | null;
  readonly secondOpinion?: boolean;
  /** 32 bits that the question determines. */
  readonly seed: number;
}

/** LLL is tried up to this rank. */
const LLL_RANK = 60;
/** A basis whose trace is this many times that of the reduced one is not probed. */
const MUCH_LONGER = 4n;
/** Units of work (16 listing steps each) within which a search is short. */
const SHORT_UNITS = 400;
const PROBES = 24;
const PROBE_STEPS = 60_000;

interface Candidate {
  readonly plan: Plan;
  readonly estimate: Estimate;
  readonly words: string;
}

export function choosePlan(question: SearchQuestion, arithmetic: Arithmetic<ArithmeticGroundLike>): Plan {
  const candidates = forms(question.gram).flatMap(({ gram, change, words }) =>
    candidateOrders(gram).map((order, i): { plan: Plan; words: string } => ({
      words: `${words}${['lightest first', 'smallest residual first', 'smallest residual first, connected'][i] ?? 'in the order given'}`,
      plan: {
        revision: 2,
        gram: toPlanMatrix(gram),
        change: change === null ? null : { matrix: toPlanMatrix(change.change), inverse: toPlanMatrix(change.inverse) },
        order,
        target: question.target,
        scope: question.scope,
        forced: question.forced ?? null,
        secondOpinion: question.secondOpinion ?? false,
        why: '',
      },
    })),
  );
  const [only] = candidates;
  if (candidates.length === 1) return { ...only!.plan, why: only!.words };
  const step = nextStep(only!.plan, [], arithmetic);
  if ('conclusion' in step) return { ...only!.plan, why: 'arithmetic settles it before any search' };
  if (isShort(only!.plan, { ...step.stage, method: 'rows' })) return { ...only!.plan, why: only!.words };
  const measured = candidates.map((c): Candidate => ({
    ...c,
    estimate: estimate(
      c.plan,
      { ...step.stage, method: 'rows' },
      { probes: PROBES, seed: question.seed, steps: PROBE_STEPS },
    ),
  }));
  const ranked = [...measured].sort((a, b) => a.estimate.mean - b.estimate.mean);
  const [best, second] = [ranked[0]!, ranked[1]!];
  const nodes = (e: Estimate) => `${Math.round(e.mean)}`;
  return {
    ...best.plan,
    why: `${best.words} (${best.estimate.probes} probes put its tree at about ${nodes(best.estimate)} nodes, the next best of ${measured.length} orders at about ${nodes(second.estimate)})`,
  };
}

/** Does the search end so soon that no other order is worth a probe? */
function isShort(plan: Plan, stage: Stage): boolean {
  return openRun(plan, stage, { from: [], to: null }).advance(SHORT_UNITS) !== 'more';
}

function forms(gram: ReadonlyBigMatrix): { gram: ReadonlyBigMatrix; change: Reduction | null; words: string }[] {
  const plain = { gram, change: null, words: '' };
  if (gram.length < 2 || gram.length > LLL_RANK) return [plain];
  const reduction = lllGram(gram);
  const trace = (m: ReadonlyBigMatrix) => m.reduce((sum, row, i) => sum + row[i]!, 0n);
  if (isIdentity(reduction.change) || trace(reduction.gram) >= trace(gram)) return [plain];
  const reduced = { gram: reduction.gram, change: reduction, words: 'after LLL, ' };
  return trace(gram) > MUCH_LONGER * trace(reduction.gram) ? [reduced] : [plain, reduced];
}
