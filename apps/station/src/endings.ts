/** The ways in which a parcel leaves a station, other than done: each one write, repeated until the database answers. */
import type { Settled } from '@palmette/threads';
import type { Desk } from './desk.ts';
import type { HeldParcel } from './held-parcel.ts';
import { keepPieces } from './shelves.ts';
import type { ToCheck } from './stage-book.ts';

/** Back to waiting with its last checkpoint. */
export function giveBack({ lease }: HeldParcel, { work, patience }: Desk): Promise<void> {
  return patience.untilAnswered('a release', () => work.release(lease));
}

/** The search stops here, open; it can be extended and goes on where it was. */
export async function spend(held: HeldParcel, desk: Desk, what: 'budget' | { memoryBytes: number }): Promise<void> {
  const { searchId } = held.lease;
  const budget = what === 'budget';
  const reason = budget ? 'its budget of CPU time is used up' : memoryReason(what.memoryBytes);
  const spent = await desk.patience.untilAnswered('a spent budget', () =>
    desk.work.spend(searchId, reason, desk.letters, budget),
  );
  if (spent) desk.log.info({ search: searchId, reason }, 'spent');
}

function memoryReason(bytes: number): string {
  return `a worker's bound of memory is used up (${Math.ceil(bytes / 1024 / 1024)} MiB counted); more CPU time alone will not help`;
}

/** A fault that trying again cannot mend. Everything that was found is kept. */
export async function breakDown({ lease }: HeldParcel, desk: Desk, reason: string): Promise<void> {
  await desk.patience.untilAnswered('a broken search', () => desk.work.broken(lease.searchId, reason, desk.letters));
  desk.log.error({ search: lease.searchId, reason }, 'broken');
}

/** The thread died, or its result could not be used: counted, run again alone, broken after the third time. */
export function crash({ lease }: HeldParcel, { work, patience, letters }: Desk, reason: string): Promise<void> {
  return patience.untilAnswered('a crash', () => work.crashed(lease, reason, letters));
}

/** CPU time and nodes of a job that leaves no checkpoints. @throws FencedOff */
export async function account(held: HeldParcel, desk: Desk, cost: { cpuMs: number; nodes?: bigint }): Promise<void> {
  await desk.patience.untilAnswered('the cost of a job', () =>
    desk.work.checkpoint(held.lease, {
      checkpoint: '',
      nodes: cost.nodes ?? 0n,
      orbits: 0n,
      cpuMs: cost.cpuMs,
      shareDone: 1,
      nodesPerSecond: null,
      chunks: [],
    }),
  );
}

export interface Verdict {
  readonly facts: ToCheck['facts'];
  /** The bytes, or: the search's draft has them. */
  readonly certificate: readonly Uint8Array[] | 'draft';
  readonly sha256: string;
  readonly checker: Settled['checker'];
  /** One sentence on what was chosen, where no plan has said it. */
  readonly method?: string;
}

/** Settled only if the checker said VERIFIED on the bytes as written; otherwise broken, with the bytes kept. */
export async function settle(held: HeldParcel, desk: Desk, verdict: Verdict): Promise<void> {
  const { searchId } = held.lease;
  const { facts, certificate, sha256, checker, method } = verdict;
  if (checker.verdict !== 'VERIFIED') {
    if (certificate !== 'draft') await keepRejected(searchId, desk, certificate);
    return reject(held, desk, checker);
  }
  const first = await desk.patience.untilAnswered('a verdict', () =>
    desk.work.settle(
      searchId,
      {
        ...facts,
        method,
        certificate: {
          sha256,
          raw: certificate,
          checkerLine: checker.line,
          checkerRevision: checker.revision,
          checkCpuMs: Math.round(checker.cpuMs),
        },
      },
      desk.letters,
    ),
  );
  desk.log.info({ search: searchId, verdict: facts.verdict }, first ? 'settled' : 'held, spent or ended meanwhile');
}

async function keepRejected(searchId: string, desk: Desk, certificate: readonly Uint8Array[]): Promise<void> {
  const pieces: string[] = [];
  for (const raw of certificate) await keepPieces(desk, raw, pieces);
  await desk.patience.untilAnswered('a rejected certificate', () => desk.work.keepDraft(searchId, pieces));
}

/** A certificate of ours that the checker does not accept; its bytes are the search's draft. */
export function reject(held: HeldParcel, desk: Desk, { line }: Settled['checker']): Promise<void> {
  return breakDown(
    held,
    desk,
    `the checker did not accept the certificate (${line}). The certificate is kept for the admin; no verdict is shown until this is explained`,
  );
}
