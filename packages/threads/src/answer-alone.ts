/** One whole question on one thread, within its own budget of CPU time and the thread's bound of memory. */
import { Refusal } from '@palmette/contracts';
import {
  chooseMethod,
  MethodCannot,
  nextStep,
  openRun,
  type FoundOrbit,
  type Plan,
  type StageResult,
} from '@palmette/search';
import { certify, certifyOpen, listedOpen } from './certify.ts';
import { begin, methodRefusal, refused, stageResult } from './choose.ts';
import { checkAtOnce } from './check-whole.ts';
import { CpuMeter } from './cpu-meter.ts';
import { FoundPacker, unpackFound } from './found-chunks.ts';
import type { AnswerEnd } from './jobs.ts';
import { BUDGET_USED_UP, memoryUsedUp } from './left-open.ts';
import { understand, type Understood } from './understand.ts';

const SLICE_NODES = 5_000;

/** The checker did not accept what the engine wrote: a fault of ours, never an answer. */
export class CheckFailed extends Error {
  override readonly name = 'CheckFailed';
}

export interface AloneOptions {
  readonly oneLine?: boolean;
  /** Bound of the search's own memory; over it the question stays open and the figure is said. */
  readonly memoryBytes?: number;
}

export function answerAlone(document: string, options: AloneOptions = {}): AnswerEnd {
  try {
    return answerUnderstood(understand(document, options), options.memoryBytes ?? Number.POSITIVE_INFINITY);
  } catch (error) {
    if (error instanceof Refusal) return refused(error);
    if (error instanceof MethodCannot) return refused(methodRefusal(error));
    throw error;
  }
}

function answerUnderstood(u: Understood, memoryBytes: number): AnswerEnd {
  const meter = new CpuMeter();
  const limitMs = (u.question.budget?.cpuSeconds ?? Number.POSITIVE_INFINITY) * 1000;
  const { plan, conclusion } = begin(u);
  const results: StageResult[] = [];
  const found = new Map<number, Iterable<FoundOrbit>>();
  let concluded = conclusion;
  while (concluded === null) {
    const step = nextStep(plan!, results, u.arithmetic);
    if ('conclusion' in step) {
      concluded = step.conclusion;
      break;
    }
    const { stage, ended } = chooseMethod(plan!, step.stage, u.seed);
    const run = ended?.run ?? openRun(plan!, stage, { from: [], to: null });
    let end = ended?.end ?? run.advance(SLICE_NODES);
    const packed = new FoundPacker();
    for (packed.add(run.takeFound()); end === 'more'; packed.add(run.takeFound())) {
      const bytes = run.bytes + packed.bytes;
      if (meter.ms > limitMs) return openAnswer(u, plan!, packed, BUDGET_USED_UP);
      if (bytes > memoryBytes) return openAnswer(u, plan!, packed, memoryUsedUp(bytes));
      end = run.advance(SLICE_NODES);
    }
    const orbits = unpackFound(packed.take().map((chunk) => chunk.raw));
    results.push(stageResult(stage, run, end === 'done', plan!.secondOpinion ? orbits : null));
    found.set(stage.no, orbits);
  }
  const { certificate } = certify(u, plan, concluded, results, found.get(concluded.listStage ?? -1) ?? []);
  return { kind: 'answer', settled: true, certificate: verified(certificate) };
}

function openAnswer(u: Understood, plan: Plan, packed: FoundPacker, reason: string): AnswerEnd {
  const { certificate } = certifyOpen(
    u,
    listedOpen(
      u,
      plan,
      packed.take().map((chunk) => chunk.raw),
    ),
  );
  return { kind: 'answer', settled: false, certificate, reason };
}

/** @throws CheckFailed if the independent checker does not say VERIFIED */
export function verified(certificate: Uint8Array[]): Uint8Array[] {
  const word = checkAtOnce(certificate);
  if (word.verdict !== 'VERIFIED') throw new CheckFailed(word.line);
  return certificate;
}
