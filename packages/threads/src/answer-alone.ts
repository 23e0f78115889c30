/** One whole question on one thread, within its own budget of CPU time. */
import { Refusal } from '@palmette/contracts';
import { chooseMethod, MethodCannot, nextStep, openRun, type FoundOrbit, type StageResult } from '@palmette/search';
import { certify, certifyOpen } from './certify.ts';
import { begin, methodRefusal, refused, stageResult } from './choose.ts';
import { checkAtOnce } from './check-whole.ts';
import { CpuMeter } from './cpu-meter.ts';
import type { AnswerEnd } from './jobs.ts';
import { fixedDimension, understand, type Understood } from './understand.ts';

const SLICE_NODES = 5_000;

/** The checker did not accept what the engine wrote: a fault of ours, never an answer. */
export class CheckFailed extends Error {
  override readonly name = 'CheckFailed';
}

export function answerAlone(document: string, options: { readonly oneLine?: boolean } = {}): AnswerEnd {
  try {
    return answerUnderstood(understand(document, options));
  } catch (error) {
    if (error instanceof Refusal) return refused(error);
    if (error instanceof MethodCannot) return refused(methodRefusal(error));
    throw error;
  }
}

function answerUnderstood(u: Understood): AnswerEnd {
  const meter = new CpuMeter();
  const limitMs = (u.question.budget?.cpuSeconds ?? Number.POSITIVE_INFINITY) * 1000;
  const { plan, conclusion } = begin(u);
  const results: StageResult[] = [];
  const found = new Map<number, FoundOrbit[]>();
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
    while (end === 'more' && meter.ms <= limitMs) end = run.advance(SLICE_NODES);
    if (end === 'more') {
      const listed = fixedDimension(u) === null && !('any' in u.question.target) ? [] : run.takeFound();
      return {
        kind: 'answer',
        settled: false,
        ...certifyOpen(u, { dimension: fixedDimension(u), plan, found: listed }),
      };
    }
    const orbits = run.takeFound();
    results.push(stageResult(stage, run, end === 'done', plan!.secondOpinion ? orbits : null));
    found.set(stage.no, orbits);
  }
  const { certificate } = certify(u, plan, concluded, results, found.get(concluded.listStage ?? -1) ?? []);
  return { kind: 'answer', settled: true, certificate: verified(certificate) };
}

/** @throws CheckFailed if the independent checker does not say VERIFIED */
export function verified(certificate: Uint8Array[]): Uint8Array[] {
  const word = checkAtOnce(certificate);
  if (word.verdict !== 'VERIFIED') throw new CheckFailed(word.line);
  return certificate;
}
