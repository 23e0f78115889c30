/**
 * Runs a cover on all threads of one process: pieces in address order, the longest running one cut again when a
 * thread is idle. The order in which pieces end decides nothing: what they found is joined in address order.
 */
import type { CheckEnd, CheckJob, CheckpointMessage, Interval, ListEnd, ListJob } from './jobs.ts';
import { BUDGET_USED_UP, memoryUsedUp } from './left-open.ts';
import type { RunningJob, Threads } from './pool.ts';
import { runServed, type Shelf } from './serve.ts';
import type { Place, Spool } from './spool.ts';

/** How jobs run where nobody else waits for the threads. */
export const PACE_HERE = { quantumCpuMs: 60_000, checkpointEveryMs: 500 } as const;

export interface Piece extends Interval {
  /** Which tree, where a cover is one of several trees. */
  readonly tree?: number;
}

export interface CoverEnd {
  readonly kind: 'done' | 'found' | 'spent';
  /** Counts for each tree number (0 where pieces name none). */
  readonly counts: readonly { nodes: bigint; orbits: bigint }[];
  /** Places in the spool of what was found, in address order. */
  readonly chunks: readonly Place[];
  readonly cpuMs: number;
  readonly reason?: string;
}

interface Held {
  piece: Piece;
  state: 'waiting' | 'running' | 'done';
  checkpoint: string | null;
  nodes: bigint;
  orbits: bigint;
  chunks: Place[];
  job?: RunningJob<ListJob | CheckJob>;
}

export interface CoverOptions {
  readonly threads: Threads;
  readonly pieces: readonly Piece[];
  readonly makeJob: (piece: Piece, checkpoint: string | null) => ListJob | CheckJob;
  readonly limitCpuMs: number;
  /** What the jobs ask for. */
  readonly shelf: Shelf;
  /** Where goes what is found. */
  readonly spool: Spool;
}

export async function runCover(options: CoverOptions): Promise<CoverEnd> {
  const held: Held[] = options.pieces.map((piece) => ({
    piece,
    state: 'waiting',
    checkpoint: null,
    nodes: 0n,
    orbits: 0n,
    chunks: [],
  }));
  let cpuMs = 0;
  let end: { kind: CoverEnd['kind']; reason?: string } | null = null;

  const finishWith = (kind: CoverEnd['kind'], reason?: string) => {
    end ??= reason === undefined ? { kind } : { kind, reason };
    for (const h of held) h.job?.stop();
  };
  const take = (h: Held, message: CheckpointMessage) => {
    h.checkpoint = message.checkpoint;
    h.nodes += message.nodes;
    h.orbits += message.orbits;
    h.chunks.push(...message.chunks.map((c) => options.spool.keep(c.raw)));
    cpuMs += message.cpuMs;
    if (cpuMs > options.limitCpuMs) finishWith('spent', BUDGET_USED_UP);
  };
  const askForCut = () => held.find((h) => h.state === 'running')?.job?.cut();

  async function work(): Promise<void> {
    while (end === null) {
      const next = held.find((h) => h.state === 'waiting');
      if (next === undefined) {
        const running = held.filter((h) => h.state === 'running');
        if (running.length === 0) return;
        askForCut();
        await Promise.race([new Promise((resolve) => setTimeout(resolve, 100)), ...running.map((h) => h.job!.end)]);
        continue;
      }
      next.state = 'running';
      const job = runServed(options.threads, options.makeJob(next.piece, next.checkpoint), options.shelf, (message) => {
        if (message.kind === 'checkpoint') return take(next, message);
        if (message.mid === null) return;
        const rest: Piece = { ...next.piece, from: message.mid };
        next.piece = { ...next.piece, to: message.mid };
        held.splice(held.indexOf(next) + 1, 0, {
          piece: rest,
          state: 'waiting',
          checkpoint: null,
          nodes: 0n,
          orbits: 0n,
          chunks: [],
        });
        job.answerCut(true);
      });
      next.job = job;
      const done: ListEnd | CheckEnd = await job.end;
      delete next.job;
      take(next, done.last);
      next.state = done.kind === 'done' || done.kind === 'found' ? 'done' : 'waiting';
      if (done.kind === 'found') finishWith('found');
      if (done.kind === 'memory') finishWith('spent', memoryUsedUp(done.memoryBytes));
    }
  }
  await Promise.all(Array.from({ length: options.threads.size }, work));

  const counts: { nodes: bigint; orbits: bigint }[] = [];
  for (const h of held) {
    const at = h.piece.tree ?? 0;
    while (counts.length <= at) counts.push({ nodes: 0n, orbits: 0n });
    counts[at]!.nodes += h.nodes;
    counts[at]!.orbits += h.orbits;
  }
  const final: { kind: CoverEnd['kind']; reason?: string } = end ?? { kind: 'done' };
  return { ...final, counts, chunks: held.flatMap((h) => h.chunks), cpuMs };
}
