/** The first look at a question: arithmetic, then a plan, then as much search as fits into the quick budget. */
import { Refusal } from '@palmette/contracts';
import {
  chooseMethod,
  choosePlan,
  cover,
  estimate,
  MethodCannot,
  nextStep,
  openRun,
  OrbitSet,
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
/** Listing steps above which a search becomes parcels even if it was quick: its check is to run in parcels too. */
const QUICK_STEPS = 2_000_000;
/** Orbits above which it does: such a list is not held whole. */
const QUICK_ORBITS = 20_000n;
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
  try {
    return chooseFor(understood, quickCpuMs, meter);
  } catch (error) {
    if (error instanceof MethodCannot) return refused(methodRefusal(error));
    throw error;
  }
}

function chooseFor(u: Understood, quickCpuMs: number, meter: CpuMeter): ChooseEnd {
  const start = begin(u);
  const quick = runQuickly(u, start.plan, start.conclusion, meter, quickCpuMs);
  if (quick.kind === 'concluded') {
    return settled(
      certify(u, start.plan, quick.conclusion, quick.results, quick.found),
      methodWords(quick.results),
      quick.results,
      meter,
    );
  }
  return {
    kind: 'planned',
    rank: u.lattice.rank,
    plan: JSON.stringify(start.plan),
    method: quick.stage.why,
    ahead: ahead(start.plan!, quick.stage, quick.results, u.seed),
    cpuMs: meter.ms,
  };
}

export function methodRefusal(error: MethodCannot): Refusal {
  return new Refusal('limit', `this method cannot answer the question: ${error.message}`, '/method');
}

/** What was chosen and why: the sentence of the stage that decided, and of the second opinion. */
export function methodWords(results: readonly StageResult[]): string {
  const said = results.filter((r) => r.repeats === undefined).at(-1)?.why;
  const second = results.find((r) => r.repeats !== undefined);
  if (said === undefined) return ARITHMETIC_WHY;
  if (second === undefined) return said;
  const found =
    second.orbits === '0' ? 'neither finds any' : `${second.orbits} ${second.orbits === '1' ? 'orbit' : 'orbits'}`;
  return `${said} ${second.why} They agree: ${found}.`;
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
      {
        gram: u.reduced.gram,
        target: u.question.target,
        scope: u.question.scope,
        forced: u.question.method ?? null,
        secondOpinion: u.question.secondOpinion === true,
        seed: u.seed,
      },
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
    const { stage, ended } = chooseMethod(plan!, step.stage, u.seed);
    const run = ended?.run ?? openRun(plan!, stage, { from: [], to: null });
    let end = ended?.end ?? run.advance(SLICE_NODES);
    while (end === 'more' && run.orbits <= QUICK_ORBITS) {
      if (meter.ms > quickCpuMs || run.steps > QUICK_STEPS) return { kind: 'long', stage, results };
      end = run.advance(SLICE_NODES);
    }
    if (run.orbits > QUICK_ORBITS) return { kind: 'long', stage, results };
    const orbits = run.takeFound();
    results.push(stageResult(stage, run, end === 'done', plan!.secondOpinion ? orbits : null));
    found.set(stage.no, orbits);
  }
}

/** @param orbits what was found, where a second opinion has to compare it; else null */
export function stageResult(
  stage: Stage,
  counts: { readonly nodes: bigint; readonly orbits: bigint },
  complete: boolean,
  orbits: Iterable<FoundOrbit> | null,
): StageResult {
  return {
    ...stage,
    complete,
    nodes: counts.nodes.toString(),
    orbits: counts.orbits.toString(),
    ...(orbits === null ? {} : { set: setOf(orbits) }),
  };
}

function setOf(orbits: Iterable<FoundOrbit>): string {
  const set = new OrbitSet();
  for (const orbit of orbits) set.add(orbit);
  return set.toString();
}

/** Method, estimate and cover of the stage that comes next. */
export function ahead(plan: Plan, next: Stage, results: readonly StageResult[], seed: number): StageAhead {
  const stage = next.why === '' ? chooseMethod(plan, next, seed).stage : next;
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
