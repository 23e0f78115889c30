/**
 * One question on all cores of this machine, without server or database: the command line's `answer`. What is found and
 * the certificate's chunks lie in spools; of a long list nothing is held whole.
 */
import { readPlan } from '@palmette/search';
import { accept, assembleStage, writeOpen, type Write } from './assemble-here.ts';
import { choose, stageResult } from './choose.ts';
import type { Refused, StageAhead } from './jobs.ts';
import { openThreads, type Threads } from './pool.ts';
import { PACE_HERE, runCover, type CoverEnd } from './run-cover.ts';
import { Spool } from './spool.ts';
import { understand } from './understand.ts';

/** Below this CPU time a question is answered in the calling thread, without starting others. */
const QUICK_CPU_MS = 300;

export interface Answer {
  readonly kind: 'answer';
  readonly settled: boolean;
  /** Why it is open, in words; absent where it is settled. */
  readonly reason?: string;
}

export interface AnswerOptions {
  readonly threads: number;
  /** Bound of a thread's own search memory; over it the question stays open and the figure is said. */
  readonly memoryBytes: number;
  /** Takes the certificate's bytes in order, once it is known that they stand. */
  readonly write: Write;
}

/**
 * Answers a question document.
 * @throws CheckFailed if the independent checker does not accept what was written
 */
export async function answerOnAllCores(document: string, options: AnswerOptions): Promise<Answer | Refused> {
  const first = choose(document, QUICK_CPU_MS);
  if (first.kind === 'refused') return first;
  if (first.kind === 'settled') {
    accept(first.checker);
    for (const bytes of first.certificate) await options.write(bytes);
    return { kind: 'answer', settled: true };
  }
  const threads = openThreads(options);
  try {
    return await runStages(document, first.plan, first.ahead, first.cpuMs, threads, options);
  } finally {
    await threads.close();
  }
}

async function runStages(
  document: string,
  plan: string,
  firstAhead: StageAhead,
  spentMs: number,
  threads: Threads,
  options: AnswerOptions,
): Promise<Answer> {
  const understood = understand(document);
  const limitMs = (understood.question.budget?.cpuSeconds ?? Number.POSITIVE_INFINITY) * 1000;
  let ahead = firstAhead;
  let cpuMs = spentMs;
  for (;;) {
    const spool = new Spool();
    try {
      const end = await listStage(plan, ahead, limitMs - cpuMs, threads, spool, options.memoryBytes);
      cpuMs += end.cpuMs;
      const found = end.chunks.map((place) => () => spool.read(place));
      if (end.kind === 'spent') {
        await writeOpen(understood, readPlan(plan), found, options.write);
        return { kind: 'answer', settled: false, reason: end.reason! };
      }
      const results = [...ahead.results, stageResult(ahead.stage, end.counts[0]!, end.kind === 'done', null)];
      const next = await assembleStage({ document, plan, results }, found, threads, options.write);
      if (next === null) return { kind: 'answer', settled: true };
      ahead = next;
    } finally {
      spool.close();
    }
  }
}

function listStage(
  plan: string,
  { stage, parcels }: StageAhead,
  limitCpuMs: number,
  threads: Threads,
  spool: Spool,
  memoryBytes: number,
): Promise<CoverEnd> {
  return runCover({
    threads,
    pieces: parcels,
    limitCpuMs,
    spool,
    shelf: {},
    makeJob: (piece, checkpoint) => ({
      kind: 'list',
      plan,
      stage,
      from: piece.from,
      to: piece.to,
      checkpoint,
      ...PACE_HERE,
      memoryBytes,
    }),
  });
}
