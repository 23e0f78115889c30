/**
 * All parcels of a stage are done: the next stage, or the certificate; a long check becomes parcels of its own. The
 * certificate is written chunk by chunk while the list is read; killed anywhere, it is begun again and its chunks, under
 * the same hashes, are already there. Nothing is a draft before it is whole.
 */
import { runServed, sha256, type AssembleEnd } from '@palmette/threads';
import type { Desk } from './desk.ts';
import { account, reject, settle } from './endings.ts';
import { inForest } from './forest.ts';
import type { HeldParcel } from './held-parcel.ts';
import { draftShelf, foundShelf, keepPieces } from './shelves.ts';
import { readBook, writeBook, type StageBook, type ToCheck } from './stage-book.ts';

/** Trees up to this many nodes are checked by the assembling thread itself: about a second. */
const WHOLE_CHECK_NODES = 2_000;

type ToCheckEnd = Extract<AssembleEnd, { kind: 'to check' }>;

export async function assemble(held: HeldParcel, desk: Desk): Promise<void> {
  const { lease } = held;
  const book = readBook(lease.stageResults);
  const result = await desk.patience.untilAnswered('the parcels of a stage', () => gather(held, desk, book));
  const chunks: string[] = [];
  const job = {
    kind: 'assemble',
    document: lease.document,
    plan: lease.plan!,
    results: [...book.results, result],
    wholeCheckNodes: WHOLE_CHECK_NODES,
  } as const;
  const end = await held.run(
    runServed(desk.engine, job, {
      found: foundShelf(desk, lease.searchId, lease.stage),
      keep: (chunk) => keepPieces(desk, chunk, chunks),
    }),
  );
  await account(held, desk, { cpuMs: end.cpuMs });
  if (end.kind === 'settled') return settle(held, desk, end);
  if (end.kind === 'stage') return nextStage(held, desk, end);
  await keepDraft(held, desk, end, chunks);
  await openDraft(held, desk, { ...book, toCheck: { facts: end.facts, sha256: sha256(end.head) } });
}

/** The chunks are kept by now; with head and last line they make the draft, in one write. */
async function keepDraft({ lease }: HeldParcel, desk: Desk, { head, last }: ToCheckEnd, chunks: readonly string[]) {
  const pieces: string[] = [];
  await keepPieces(desk, head, pieces);
  pieces.push(...chunks);
  if (last !== null) await keepPieces(desk, last, pieces);
  await desk.patience.untilAnswered('a certificate in the making', () => desk.work.keepDraft(lease.searchId, pieces));
}

/** Everything but the trees is checked here; these become parcels. */
async function openDraft(held: HeldParcel, desk: Desk, book: StageBook & { toCheck: ToCheck }): Promise<void> {
  const { lease } = held;
  const job = { kind: 'open', certificate: book.toCheck.sha256 } as const;
  const end = await held.run(runServed(desk.engine, job, { certificate: draftShelf(desk, lease.searchId) }));
  if (end.kind === 'not accepted') return reject(held, desk, end.checker);
  await account(held, desk, { cpuMs: end.cpuMs });
  await desk.patience.untilAnswered('the cover of a check', () =>
    desk.work.goOn(lease.searchId, {
      phase: 'checking',
      stage: lease.stage,
      stageResults: writeBook(book),
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

/** What the parcels of the stage counted. */
async function gather(
  { lease }: HeldParcel,
  { work }: Desk,
  { stage }: StageBook,
): Promise<StageBook['results'][number]> {
  const parcels = await work.parcels(lease.searchId, 'listing', lease.stage);
  const sum = (of: 'nodes' | 'orbits') => parcels.reduce((total, parcel) => total + parcel[of], 0n);
  const orbits = sum('orbits');
  return {
    ...stage,
    // a stage that looks for one embedding ends at the first; otherwise every parcel ran to its end
    complete: stage.purpose === 'all' || orbits === 0n,
    nodes: sum('nodes').toString(),
    orbits: orbits.toString(),
  };
}
