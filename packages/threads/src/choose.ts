/** The first look at a question: arithmetic, then a plan, then as much search as fits into the quick budget. */
import { Refusal } from '@palmette/contracts';
import {
  choosePlan,
  cover,
  estimate,
  nextStep,
  openRun,
  type Conclusion,
  type FoundOrbit,
  type Plan,
  type Stage,
  type StageResult,
} from '@palmette/search';
import { checkAtOnce } from './check-whole.ts';
import { certify, type Certified } from './certify.ts';
import { CpuMeter } from './cpu-meter.ts';
import type { ChooseEnd, Refused, Settled, StageAhead } from './jobs.ts';
import { fixedDimension, understand, type Understood } from './understand.ts';

/** Work between two looks at the clock. */
const SLICE_NODES = 2_000;
/** Nodes above which a search becomes parcels even if it was quick: its check is to run in parcels too. */
const QUICK_NODES = 20_000n;
/** Pieces of a first cover: enough that a few long ones can be cut again, few enough to draw. */
const COVER_PARCELS = 48;
const ESTIMATE_PROBES = 200;

export function refused(error: Refusal): Refused {
  return {
    kind: 'refused',
    code: error.code,
    message: error.message,
    ...(error.path === undefined ? {} : { path: error.path }),
  };
}

export function choose(document: string, quickCpuMs: number): ChooseEnd {
  const meter = new CpuMeter();
  let understood: Understood;
  try {
    understood = understand(document);
  } catch (error) {
    if (error instanceof Refusal) return refused(error);
    throw error;
  }
  const start = begin(understood);
  const quick = runQuickly(understood, start.plan, start.conclusion, meter, quickCpuMs);
  if (quick.kind === 'concluded') {
    return settled(
      certify(understood, start.plan, quick.conclusion, quick.results, quick.found),
      start.plan?.why ?? ARITHMETIC_WHY,
      quick.results,
      meter,
    );
  }
  return {
    kind: 'planned',
    rank: understood.lattice.rank,
    plan: JSON.stringify(start.plan),
    method: start.plan!.why,
    ahead: ahead(start.plan!, quick.stage, quick.results, understood.seed),
    cpuMs: meter.ms,
  };
}

export const ARITHMETIC_WHY = 'Arithmetic settles it before any search.';

/** Arithmetic first where the target fixes n, because a plan can cost more than the answer. */
export function begin(u: Understood): { plan: Plan | null; conclusion: Conclusion | null } {
  const n = fixedDimension(u);
  const ground = n === null ? null : u.arithmetic(n);
  if (n !== null && ground !== null) {
    return {
      plan: null,
      conclusion: {
        verdict: 'excluded',
        dimension: n,
        complete: true,
        exclusion: { dimension: n, arithmetic: ground },
        listStage: null,
        listComplete: true,
      },
    };
  }
  return {
    plan: choosePlan(
      { gram: u.reduced.gram, target: u.question.target, scope: u.question.scope, seed: u.seed },
      u.arithmetic,
    ),
    conclusion: null,
  };
}

type Quick =
  | {
      readonly kind: 'concluded';
      readonly conclusion: Conclusion;
      readonly results: StageResult[];
      readonly found: FoundOrbit[];
    }
  | { readonly kind: 'long'; readonly stage: Stage; readonly results: StageResult[] };

function runQuickly(
  u: Understood,
  plan: Plan | null,
  known: Conclusion | null,
  meter: CpuMeter,
  quickCpuMs: number,
): Quick {
  if (known !== null) return { kind: 'concluded', conclusion: known, results: [], found: [] };
  const results: StageResult[] = [];
  const found = new Map<number, FoundOrbit[]>();
  for (;;) {
    const step = nextStep(plan!, results, u.arithmetic);
    if ('conclusion' in step) {
      return {
        kind: 'concluded',
        conclusion: step.conclusion,
        results,
        found: found.get(step.conclusion.listStage ?? -1) ?? [],
      };
    }
    const run = openRun(plan!, step.stage, { from: [], to: null });
    let end = run.advance(SLICE_NODES);
    while (end === 'more') {
      if (meter.ms > quickCpuMs || run.nodes > QUICK_NODES) return { kind: 'long', stage: step.stage, results };
      end = run.advance(SLICE_NODES);
    }
    results.push(stageResult(step.stage, BigInt(run.nodes), BigInt(run.orbits), end === 'done'));
    found.set(step.stage.no, run.takeFound());
  }
}

export function stageResult(stage: Stage, nodes: bigint, orbits: bigint, complete: boolean): StageResult {
  return {
    no: stage.no,
    dimension: stage.dimension,
    purpose: stage.purpose,
    whole: stage.whole,
    complete,
    nodes: nodes.toString(),
    orbits: orbits.toString(),
  };
}

/** Estimate and cover of the stage that comes next. */
export function ahead(plan: Plan, stage: Stage, results: readonly StageResult[], seed: number): StageAhead {
  return {
    stage,
    results,
    estimate: estimate(plan, stage, { probes: ESTIMATE_PROBES, seed }),
    parcels: cover(plan, stage, COVER_PARCELS),
  };
}

export function settled(
  certified: Certified,
  method: string,
  results: readonly StageResult[],
  meter: CpuMeter,
): Settled {
  return {
    kind: 'settled',
    ...certified,
    checker: checkAtOnce(certified.certificate),
    method,
    nodes: results.reduce((sum, r) => sum + BigInt(r.nodes), 0n),
    cpuMs: meter.ms,
  };
}
