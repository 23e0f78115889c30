/** A parcel of a tree, the engine's or the checker's: runs from its checkpoint until it is done, yields or is stopped. */
import { runServed, type CheckJob, type CutMessage, type ListJob, type Shelf } from '@palmette/threads';
import { answerCut } from './cut.ts';
import type { Desk } from './desk.ts';
import { spend } from './endings.ts';
import { inForest, inTree } from './forest.ts';
import type { HeldParcel } from './held-parcel.ts';
import { ParcelWriter } from './parcel-writer.ts';
import { draftShelf } from './shelves.ts';
import { NoBook, readBook } from './stage-book.ts';

export async function list(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  await runInterval(held, desk, {
    kind: 'list',
    plan: lease.plan!,
    stage: readBook(lease.stageResults).stage,
    from: lease.from,
    to: lease.to,
    ...paceOf(held, desk),
    memoryBytes: desk.config.memoryBytes,
  });
}

export async function check(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  const { toCheck } = readBook(lease.stageResults);
  if (toCheck === null) throw new NoBook('the certificate that is to be checked is not named');
  const job: CheckJob = { kind: 'check', certificate: toCheck.sha256, ...inTree(lease), ...paceOf(held, desk) };
  await runInterval(held, desk, job, { certificate: draftShelf(desk, lease.searchId) });
}

function paceOf({ lease }: HeldParcel, { config }: Desk) {
  return {
    checkpoint: lease.checkpoint,
    quantumCpuMs: Math.min(config.quantumSeconds * 1000, lease.budgetLeftMs ?? Number.POSITIVE_INFINITY),
    checkpointEveryMs: config.checkpointSeconds * 1000,
  };
}

async function runInterval(held: HeldParcel, desk: Desk, job: ListJob | CheckJob, shelf: Shelf = {}): Promise<void> {
  const budgetLeftMs = held.lease.budgetLeftMs ?? Number.POSITIVE_INFINITY;
  const cpuBeforeMs = held.lease.cpuMs;
  const writer = new ParcelWriter(held, desk);
  const inCover = (cut: CutMessage): CutMessage =>
    job.kind === 'check' && cut.mid !== null
      ? { ...cut, mid: inForest(job.tree, { from: cut.mid, to: null }).from }
      : cut;
  const running = runServed<ListJob | CheckJob>(desk.engine, job, shelf, (message) => {
    if (message.kind === 'cut') return void answerCut(held, desk, inCover(message), running);
    held.note(message.shareDone);
    writer.push(message);
  });
  const end = await held.run(running).catch(async (fault: unknown) => {
    await writer.written(); // what it reported before it died still counts
    throw fault;
  });
  switch (end.kind) {
    case 'done':
    case 'found':
      return writer.end(end.last, end.kind);
    case 'memory':
      await writer.end(end.last, 'released');
      return spend(held, desk, { memoryBytes: end.memoryBytes });
    case 'yielded':
    case 'stopped':
      await writer.end(end.last, 'released');
      if (held.lease.cpuMs - cpuBeforeMs >= budgetLeftMs) return spend(held, desk, 'budget');
  }
}
