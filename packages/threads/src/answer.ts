/** One question on all cores of this machine, without server or database: the command line's `answer`. */
import { readPlan } from '@palmette/search';
import { CheckFailed } from './answer-alone.ts';
import { certifyOpen } from './certify.ts';
import { choose, stageResult } from './choose.ts';
import { unpackFound } from './found-chunks.ts';
import type { CheckerWord, Refused, StageAhead } from './jobs.ts';
import { openThreads, type Threads } from './pool.ts';
import { runCover } from './run-cover.ts';
import { fixedDimension, understand } from './understand.ts';

/** Below this CPU time a question is answered in the calling thread, without starting others. */
const QUICK_CPU_MS = 1_000;
const CHECKPOINT_EVERY_MS = 500;
const QUANTUM_CPU_MS = 60_000;
/** Documented bound of one thread's search memory. */
export const MEMORY_BYTES = 1024 * 1024 * 1024;
const WHOLE_CHECK_NODES = 200_000;

export interface Answer {
  readonly kind: 'answer';
  readonly settled: boolean;
  readonly certificate: readonly Uint8Array[];
  /** Why it is open, in words; absent where it is settled. */
  readonly reason?: string;
}

/**
 * Answers a question document.
 * @throws CheckFailed if the independent checker does not accept what was written
 */
export async function answerOnAllCores(
  document: string,
  options: { readonly threads: number },
): Promise<Answer | Refused> {
  const first = choose(document, QUICK_CPU_MS);
  if (first.kind === 'refused') return first;
  if (first.kind === 'settled') return accepted(first.certificate, first.checker);
  const threads = openThreads(options);
  try {
    return await runStages(document, first.plan, first.ahead, first.cpuMs, threads);
  } finally {
    await threads.close();
  }
}

function accepted(certificate: readonly Uint8Array[], word: CheckerWord): Answer {
  if (word.verdict !== 'VERIFIED') throw new CheckFailed(word.line);
  return { kind: 'answer', settled: true, certificate };
}

async function runStages(
  document: string,
  plan: string,
  firstAhead: StageAhead,
  spentMs: number,
  threads: Threads,
): Promise<Answer> {
  const understood = understand(document);
  const limitMs = (understood.question.budget?.cpuSeconds ?? Number.POSITIVE_INFINITY) * 1000;
  let ahead = firstAhead;
  let cpuMs = spentMs;
  for (;;) {
    const { stage } = ahead;
    const end = await runCover({
      threads,
      pieces: ahead.parcels,
      limitCpuMs: limitMs - cpuMs,
      makeJob: (piece, checkpoint) => ({
        kind: 'list',
        plan,
        stage,
        from: piece.from,
        to: piece.to,
        checkpoint,
        quantumCpuMs: QUANTUM_CPU_MS,
        checkpointEveryMs: CHECKPOINT_EVERY_MS,
        memoryBytes: MEMORY_BYTES,
      }),
    });
    cpuMs += end.cpuMs;
    if (end.kind === 'spent') {
      const fixed = fixedDimension(understood);
      const listed = fixed === null && !('any' in understood.question.target) ? [] : unpackFound(end.chunks);
      const open = certifyOpen(understood, { dimension: fixed, plan: readPlan(plan), found: listed });
      return { kind: 'answer', settled: false, certificate: open.certificate, reason: end.reason! };
    }
    const results = [...ahead.results, stageResult(stage, end.counts[0]!, end.kind === 'done', null)];
    const assembled = await threads.run({
      kind: 'assemble',
      document,
      plan,
      results,
      found: end.chunks,
      wholeCheckNodes: WHOLE_CHECK_NODES,
    }).end;
    if (assembled.kind === 'settled') return accepted(assembled.certificate, assembled.checker);
    if (assembled.kind === 'to check')
      return accepted(assembled.certificate, await checkInParcels(assembled.certificate, assembled.parcels, threads));
    ahead = assembled.ahead;
  }
}

async function checkInParcels(
  certificate: readonly Uint8Array[],
  pieces: Parameters<typeof runCover>[0]['pieces'],
  threads: Threads,
): Promise<CheckerWord> {
  const end = await runCover({
    threads,
    pieces,
    limitCpuMs: Number.POSITIVE_INFINITY,
    makeJob: (piece, checkpoint) => ({
      kind: 'check',
      certificate,
      tree: piece.tree!,
      from: piece.from,
      to: piece.to,
      checkpoint,
      quantumCpuMs: QUANTUM_CPU_MS,
      checkpointEveryMs: CHECKPOINT_EVERY_MS,
    }),
  });
  const counts = end.counts.map((c) => ({ nodes: c.nodes.toString(), orbits: c.orbits.toString() }));
  return (await threads.run({ kind: 'conclude', certificate, counts }).end).checker;
}
