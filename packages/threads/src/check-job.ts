/** The check of a certificate in parcels: opened once in each thread, its trees run in intervals, concluded. */
import { createHash, type Hash } from 'node:crypto';
import {
  CHECKER_REVISION,
  concludeCheck,
  openCheck,
  openCheckRun,
  splitCheck,
  type CheckWork,
  type Outcome,
} from '@palmette/checker';
import { pieces, type Ask } from './asking.ts';
import { CpuMeter } from './cpu-meter.ts';
import type { CheckEnd, CheckerWord, CheckJob, ConcludeEnd, ConcludeJob, OpenEnd, OpenJob } from './jobs.ts';
import { paceRun, type Talk } from './paced-run.ts';

/** Parcels of each tree of a check. */
const CHECK_PARCELS = 32;

interface Opened {
  /** Hash of the head, as the job names the certificate. */
  readonly key: string;
  /** Hash of all bytes. */
  readonly sha256: string;
  readonly work: CheckWork;
}

/** The certificate that this thread opened last: the parcels of one check come one after the other. */
let lastOpened: Opened | null = null;

function opened(key: string, ask: Ask): Opened | Outcome {
  if (lastOpened?.key === key) return lastOpened;
  lastOpened = null;
  const whole = createHash('sha256');
  const answer = openCheck(hashed(pieces('certificate', ask), whole));
  if ('outcome' in answer) return answer.outcome;
  return (lastOpened = { key, sha256: whole.digest('hex'), work: answer.work });
}

/** The checker reads them one by one, to the last. */
function* hashed(bytes: Iterable<Uint8Array>, hash: Hash): Generator<Uint8Array> {
  for (const piece of bytes) {
    hash.update(piece);
    yield piece;
  }
}

/** A certificate of ours that was opened before is not accepted now: the bytes have changed. */
class NotOpened extends Error {
  override readonly name = 'NotOpened';
}

function openedBefore(key: string, ask: Ask): Opened {
  const answer = opened(key, ask);
  if ('line' in answer) throw new NotOpened(`our own certificate was not accepted: ${answer.line}`);
  return answer;
}

export function open(job: OpenJob, ask: Ask): OpenEnd {
  const meter = new CpuMeter();
  const answer = opened(job.certificate, ask);
  if ('line' in answer) return { kind: 'not accepted', checker: wordOf(answer, meter) };
  return {
    kind: 'opened',
    parcels: answer.work.trees.flatMap((tree, no) =>
      splitCheck(tree, CHECK_PARCELS).map((piece, _, all) => ({ ...piece, share: 1 / all.length, tree: no })),
    ),
    cpuMs: meter.ms,
  };
}

export function checkParcel(job: CheckJob, talk: Talk, ask: Ask): CheckEnd {
  const tree = openedBefore(job.certificate, ask).work.trees[job.tree]!;
  const run = openCheckRun(tree, { from: job.from, to: job.to }, job.checkpoint ?? undefined);
  return paceRun(run, { ...job, ...talk, memoryBytes: Number.POSITIVE_INFINITY, findings: null }) as CheckEnd;
}

export function conclude(job: ConcludeJob, ask: Ask): ConcludeEnd {
  const meter = new CpuMeter();
  const { work, sha256: hash } = openedBefore(job.certificate, ask);
  return { checker: wordOf(concludeCheck(work, job.counts), meter), sha256: hash };
}

function wordOf({ verdict, line }: Outcome, meter: CpuMeter): CheckerWord {
  return { verdict, line, revision: CHECKER_REVISION, cpuMs: meter.ms };
}
