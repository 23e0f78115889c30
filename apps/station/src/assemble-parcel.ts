/** All parcels of a stage are done: the next stage, or the certificate; a long check becomes parcels of its own. */
import type { AssembleEnd } from '@palmette/threads';
import type { Desk } from './desk.ts';
import { account, settle } from './endings.ts';
import { inForest } from './forest.ts';
import type { HeldParcel } from './held-parcel.ts';
import { readBook, writeBook, type StageBook } from './stage-book.ts';

/** Trees up to this many nodes are checked by the assembling thread itself: about a second. */
const WHOLE_CHECK_NODES = 2_000;

export async function assemble(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  const book = readBook(lease.stageResults);
  const { result, found } = await desk.patience.untilAnswered('the parcels of a stage', () => gather(held, desk, book));
  const end = await held.run(
    desk.engine.run({
      kind: 'assemble',
      document: lease.document,
      plan: lease.plan!,
      results: [...book.results, result],
      found,
      wholeCheckNodes: WHOLE_CHECK_NODES,
    }),
  );
  await account(held, desk, { cpuMs: end.cpuMs });
  if (end.kind === 'settled') return settle(held, desk, end);
  if (end.kind === 'stage') return nextStage(held, desk, end);
  await desk.patience.untilAnswered('a certificate in the making', () =>
    desk.work.keepDraft(lease.searchId, end.certificate),
  );
  await desk.patience.untilAnswered('the cover of a check', () =>
    desk.work.goOn(lease.searchId, {
      phase: 'checking',
      stage: lease.stage,
      stageResults: writeBook({ ...book, toCheck: { facts: end.facts, sha256: end.sha256 } }),
      facts: {},
      parcels: end.parcels.map(({ tree, share, ...interval }) => ({ ...inForest(tree, interval), share })),
    }),
  );
}

function nextStage(
  { lease }: HeldParcel,
  { work, patience }: Desk,
  { ahead: { stage, results, estimate, parcels } }: Extract<AssembleEnd, { kind: 'stage' }>,
): Promise<void> {
  return patience.untilAnswered('the next stage', () =>
    work.goOn(lease.searchId, {
      phase: 'listing',
      stage: stage.no,
      stageResults: writeBook({ stage, results, toCheck: null }),
      facts: { estimate: JSON.stringify(estimate) },
      parcels,
    }),
  );
}

/** What the parcels of the stage counted and found, in address order. */
async function gather({ lease }: HeldParcel, { work }: Desk, { stage }: StageBook) {
  const parcels = await work.parcels(lease.searchId, 'listing', lease.stage);
  const sum = (of: 'nodes' | 'orbits') => parcels.reduce((total, parcel) => total + parcel[of], 0n);
  const found: Uint8Array[] = [];
  for await (const chunk of work.found(lease.searchId, lease.stage)) found.push(chunk.raw);
  const orbits = sum('orbits');
  const result: StageBook['results'][number] = {
    ...stage,
    // a stage that looks for one embedding ends at the first; otherwise every parcel ran to its end
    complete: stage.purpose === 'all' || orbits === 0n,
    nodes: sum('nodes').toString(),
    orbits: orbits.toString(),
  };
  return { result, found };
}
