/**
 * Chooses the method of a stage. Rows, frames (by a list of columns and by gluing) and columns are tried in turn for as many listing steps as the round allows, each going on
 * where it stood, until one ends; if none does, the one whose estimate is least goes on alone. Rounds, steps and probes come from the
 * question and from constants of the plan's revision, never from a clock, so everybody chooses the same.
 */
import { estimate, type Estimate } from './estimate.ts';
import { METHODS, type Method } from './method.ts';
import { canChooseRows, columnsOf, framesStage, gluingOf, rankOf, whyNot } from './open-ladder.ts';
import type { Plan } from './plan.ts';
import { openRun, type Advance, type Run } from './run.ts';
import type { Stage } from './stages.ts';

/** A forced method cannot answer the question. */
export class MethodCannot extends Error {
  override readonly name = 'MethodCannot';
}

export interface ChosenStage {
  readonly stage: Stage;
  /** The run that ended while the methods were tried, with what it found; null too where it found too much to be held. */
  readonly ended: { readonly run: Run; readonly end: Exclude<Advance, 'more'> } | null;
}

/** Units of work (16 listing steps each) that each method gets in a round. */
const ROUNDS = [4_000, 60_000, 600_000];
/** Values that may be tried for the list of columns, for one unit of work of the round. */
const LISTING_STEPS = 160;
const PROBES = 60;
const PROBE_STEPS = 1_500_000;
/** Gluing factors the determinant and reduces lattices: not worth it before the others had a try. */
const GLUE_FROM_ROUND = 1;
/** A choice of the row at each node costs 5 to 10 times as much for a node, and pays where it saves more: after the others had two tries. */
const FEWEST_FROM_ROUND = 2;
/** Columns answer `any` and large n; below this excess frames and rows are better. */
const COLUMNS_FROM = 3;

/** Orbits that a trial holds; one that finds more drops them all, and if it ends, its method lists them again where lists stream. */
const HELD_ORBITS = 20_000n;
/** Units between two looks at what a trial holds. */
const SLICE_UNITS = 2_000;

interface Trial {
  readonly stage: Stage;
  run: Run | null;
}

/**
 * @param seed 32 bits that the question determines
 * @throws MethodCannot where the question forces a method that cannot answer it
 */
export function chooseMethod(plan: Plan, stage: Stage, seed: number): ChosenStage {
  if (stage.repeats !== undefined) return { stage, ended: null };
  if (plan.forced !== null) return { stage: forcedStage(plan, stage, plan.forced), ended: null };
  const trials = METHODS.map((method): Trial => ({ stage: { ...stage, method }, run: null }));
  trials.splice(1, 0, { stage: { ...stage, method: 'rows', fewest: true }, run: null });
  trials.splice(3, 0, { stage: { ...stage, method: 'frames', glue: true }, run: null });
  if (rankOf(plan) > 0)
    for (const [round, units] of ROUNDS.entries()) {
      for (const trial of trials) {
        if (!mayTry(trial.stage, plan, round)) continue;
        const end = advance(plan, trial, units);
        if (end === 'more') continue;
        const { method } = trial.stage;
        const why =
          round === 0 && method === 'rows'
            ? `Rows, ${plan.why}: ${trial.run!.nodes} nodes.`
            : `${named(trial.stage, plan)}: ended after ${trial.run!.nodes} nodes${others(trials, trial)}.`;
        return {
          stage: { ...trial.stage, why },
          ended: trial.run!.orbits > HELD_ORBITS ? null : { run: trial.run!, end },
        };
      }
    }
  return { stage: byEstimate(plan, trials, seed), ended: null };
}

function mayTry({ method, glue, fewest, dimension, whole }: Stage, plan: Plan, round: number): boolean {
  const excess = dimension - rankOf(plan);
  if (method === 'columns' && !whole && excess < COLUMNS_FROM) return false;
  if (fewest === true) return round >= FEWEST_FROM_ROUND && canChooseRows(plan);
  if (glue === true && (round < GLUE_FROM_ROUND || excess > 1 || whole)) return false;
  return whyNot(method, plan, dimension, whole) === null;
}

function advance(plan: Plan, trial: Trial, units: number): Advance {
  if (trial.run === null) {
    if (trial.stage.glue === true) {
      if (gluingOf(plan, trial.stage.dimension) === null) return 'more';
    } else if (trial.stage.method !== 'rows' && columnsOf(plan, trial.stage, units * LISTING_STEPS) === null)
      return 'more';
    trial.run = openRun(plan, trial.stage, { from: [], to: null });
  }
  return advanceHolding(trial.run, units);
}

function advanceHolding(run: Run, units: number): Advance {
  for (let left = units; left > 0; left -= SLICE_UNITS) {
    const end = run.advance(Math.min(left, SLICE_UNITS));
    if (run.orbits > HELD_ORBITS) run.takeFound();
    if (end !== 'more') return end;
  }
  return 'more';
}

function named({ method, glue, fewest }: Stage, plan: Plan): string {
  if (fewest === true) return 'Rows, the one with fewest children first at each node';
  if (method === 'rows') return `Rows, ${plan.why}`;
  return method === 'columns' ? 'Columns' : glue === true ? 'Frames by gluing' : 'Frames';
}

function others(trials: readonly Trial[], chosen: Trial): string {
  const left = trials.filter((t) => t !== chosen && t.run !== null);
  return left.map((t) => `; ${t.stage.method} had not ended after ${t.run!.nodes}`).join('');
}

function byEstimate(plan: Plan, trials: readonly Trial[], seed: number): Stage {
  const open = trials.filter((t) => t.run !== null && t.stage.glue !== true);
  if (open.length <= 1) {
    const only = open[0] ?? trials.find((t) => t.stage.method === 'rows')!;
    return { ...only.stage, why: `${named(only.stage, plan)}: no other method can list this in reach.` };
  }
  const measured = open.map((trial) => {
    const guess = estimate(plan, trial.stage, { probes: PROBES, seed, steps: PROBE_STEPS });
    return { trial, guess, work: guess.mean * stepsPerNode(trial.run!) };
  });
  measured.sort((a, b) => a.work - b.work);
  const [best, ...rest] = measured;
  const told = (m: { trial: Trial; guess: Estimate }) => `about ${Math.round(m.guess.mean)} nodes`;
  return {
    ...best!.trial.stage,
    why: `${named(best!.trial.stage, plan)}: ${best!.guess.probes} probes put the tree at ${told(best!)}${rest
      .map((m) => `, that of ${m.trial.stage.method} at ${told(m)}`)
      .join('')}.`,
  };
}

function stepsPerNode(run: Run): number {
  return run.steps / Math.max(1, Number(run.nodes));
}

function forcedStage(plan: Plan, stage: Stage, method: Method): Stage {
  const reason = whyNot(method, plan, stage.dimension, stage.whole);
  const forced = reason === null ? feasible(plan, { ...stage, method }) : null;
  if (forced !== null) return { ...forced, why: `${named(forced, plan)}, as the question asks.` };
  const why = reason ?? 'there are too many admissible columns to list';
  if ('least' in plan.target) return { ...stage, method: 'rows', why: `Rows, ${plan.why}: ${why}.` };
  throw new MethodCannot(why);
}

function feasible(plan: Plan, stage: Stage): Stage | null {
  if (stage.method === 'frames') return framesStage(plan, stage);
  return stage.method === 'rows' || columnsOf(plan, stage) !== null ? stage : null;
}
