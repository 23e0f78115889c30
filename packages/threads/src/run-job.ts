/** What a thread does with each kind of job. */
import {
  CHECKER_REVISION,
  concludeCheck,
  openCheck,
  openCheckRun,
  splitCheck,
  type CheckWork,
} from '@palmette/checker';
import { nextStep, openRun, readPlan, type FoundOrbit, type StageResult } from '@palmette/search';
import { answerAlone } from './answer-alone.ts';
import { checkAtOnce } from './check-whole.ts';
import { certify } from './certify.ts';
import { ahead, choose, methodWords, stageResult } from './choose.ts';
import { CpuMeter } from './cpu-meter.ts';
import type {
  AssembleEnd,
  AssembleJob,
  CheckEnd,
  CheckJob,
  ConcludeEnd,
  ConcludeJob,
  Job,
  JobEnd,
  JobMessage,
  ListEnd,
  ListJob,
} from './jobs.ts';
import { packFound, unpackFound } from './found-chunks.ts';
import { paceRun } from './paced-run.ts';
import { sha256, understand } from './understand.ts';

/** Parcels of a check. */
const CHECK_PARCELS = 32;

export interface ThreadTalk {
  readonly words: Int32Array;
  readonly say: (message: JobMessage) => void;
}

export function runJob<J extends Job>(job: J, talk: ThreadTalk): JobEnd<J> {
  return run(job, talk) as JobEnd<J>;
}

function run(job: Job, talk: ThreadTalk): JobEnd<Job> {
  switch (job.kind) {
    case 'choose':
      return choose(job.document, job.quickCpuMs);
    case 'list':
      return list(job, talk);
    case 'assemble':
      return assemble(job);
    case 'check':
      return checkParcel(job, talk);
    case 'conclude':
      return conclude(job);
    case 'answer':
      return answerAlone(job.document, job);
  }
}

function list(job: ListJob, talk: ThreadTalk): ListEnd {
  const run = openRun(
    readPlan(job.plan),
    job.stage,
    { from: job.from, to: job.to },
    job.checkpoint ?? undefined,
  );
  return paceRun(run, { ...job, ...talk, takeChunks: () => packFound(run.takeFound()) });
}

function assemble(job: AssembleJob): AssembleEnd {
  const meter = new CpuMeter();
  const understood = understand(job.document);
  const plan = readPlan(job.plan);
  const found: FoundOrbit[] = unpackFound(job.found);
  const results = plan.secondOpinion ? withSet(job.results, found) : job.results;
  const step = nextStep(plan, results, understood.arithmetic);
  if ('stage' in step)
    return { kind: 'stage', ahead: ahead(plan, step.stage, results, understood.seed), cpuMs: meter.ms };
  const certified = certify(understood, plan, step.conclusion, results, found);
  const nodes = results.reduce((sum, r) => sum + BigInt(r.nodes), 0n);
  if (nodes <= BigInt(job.wholeCheckNodes)) {
    return {
      kind: 'settled',
      ...certified,
      checker: checkAtOnce(certified.certificate),
      method: methodWords(results),
      nodes,
      cpuMs: meter.ms,
    };
  }
  const work = workOf(certified.certificate);
  return {
    kind: 'to check',
    ...certified,
    parcels: work.trees.flatMap((tree, no) =>
      splitCheck(tree, CHECK_PARCELS).map((piece, _, all) => ({ ...piece, share: 1 / all.length, tree: no })),
    ),
    cpuMs: meter.ms,
  };
}

/** The last stage's result with the set of its orbits, for the second opinion to compare. */
function withSet(results: readonly StageResult[], found: readonly FoundOrbit[]): StageResult[] {
  const last = results.at(-1)!;
  const counts = { nodes: BigInt(last.nodes), orbits: BigInt(last.orbits) };
  return [...results.slice(0, -1), stageResult(last, counts, last.complete, found)];
}

/** The certificate that this thread opened last: the parcels of one check come one after the other. */
let lastOpened: { readonly key: string; readonly work: CheckWork } | null = null;

function workOf(certificate: readonly Uint8Array[]): CheckWork {
  const bytes = Buffer.concat(certificate);
  const key = sha256(bytes);
  if (lastOpened?.key === key) return lastOpened.work;
  const opened = openCheck(bytes);
  if ('outcome' in opened) throw new Error(`our own certificate was not accepted: ${opened.outcome.line}`);
  lastOpened = { key, work: opened.work };
  return opened.work;
}

function checkParcel(job: CheckJob, talk: ThreadTalk): CheckEnd {
  const tree = workOf(job.certificate).trees[job.tree]!;
  const run = openCheckRun(tree, { from: job.from, to: job.to }, job.checkpoint ?? undefined);
  return paceRun(run, { ...job, ...talk, memoryBytes: Number.POSITIVE_INFINITY, takeChunks: () => [] }) as CheckEnd;
}

function conclude(job: ConcludeJob): ConcludeEnd {
  const meter = new CpuMeter();
  const outcome = concludeCheck(workOf(job.certificate), job.counts);
  return { checker: { verdict: outcome.verdict, line: outcome.line, revision: CHECKER_REVISION, cpuMs: meter.ms } };
}
