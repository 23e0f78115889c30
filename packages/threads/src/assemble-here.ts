/**
 * The certificate without server or database: found orbits are read from where they were put aside, its chunks are put
 * aside in their turn, it is checked, and only then is it written, head first.
 */
import type { WrittenFile } from '@palmette/certificate';
import type { Plan } from '@palmette/search';
import { CheckFailed } from './answer-alone.ts';
import { certifyOpenInChunks, listedOpen } from './certify.ts';
import type { AssembleJob, CheckerWord, StageAhead } from './jobs.ts';
import type { Threads } from './pool.ts';
import { PACE_HERE, runCover } from './run-cover.ts';
import { runServed } from './serve.ts';
import { Spool } from './spool.ts';
import { sha256, type Understood } from './understand.ts';

/** Trees up to this many nodes are checked by the assembling thread itself. */
const WHOLE_CHECK_NODES = 200_000;

/** Takes a certificate's bytes in order. */
export type Write = (bytes: Uint8Array) => Promise<void>;

/** @throws CheckFailed */
export function accept(word: CheckerWord): void {
  if (word.verdict !== 'VERIFIED') throw new CheckFailed(word.line);
}

/** Reads a piece again from where it was put aside. */
export type Piece = () => Uint8Array;

export async function writeOpen(u: Understood, plan: Plan, found: readonly Piece[], write: Write): Promise<void> {
  const spool = new Spool();
  try {
    const chunks: Piece[] = [];
    const open = listedOpen(u, plan, read(found));
    const file = certifyOpenInChunks(u, open, (chunk) => chunks.push(kept(spool, chunk)));
    for (const piece of read(inOrder(file, chunks))) await write(piece);
  } finally {
    spool.close();
  }
}

/** The next stage, or null: the certificate has been written. */
export async function assembleStage(
  of: Pick<AssembleJob, 'document' | 'plan' | 'results'>,
  found: readonly Piece[],
  threads: Threads,
  write: Write,
): Promise<StageAhead | null> {
  const spool = new Spool();
  try {
    const chunks: Piece[] = [];
    const job = { kind: 'assemble', ...of, wholeCheckNodes: WHOLE_CHECK_NODES } as const;
    const end = await runServed(threads, job, {
      found: pieceOf(found),
      keep: async (chunk) => void chunks.push(kept(spool, chunk)),
    }).end;
    if (end.kind === 'stage') return end.ahead;
    if (end.kind === 'settled') accept(end.checker);
    else await checkInParcels(inOrder(end, chunks), threads);
    const file = end.kind === 'settled' ? end.certificate : read(inOrder(end, chunks));
    for (const piece of file) await write(piece);
    return null;
  } finally {
    spool.close();
  }
}

function kept(spool: Spool, chunk: Uint8Array): Piece {
  const place = spool.keep(chunk);
  return () => spool.read(place);
}

function inOrder({ head, last }: WrittenFile, chunks: readonly Piece[]): Piece[] {
  return [() => head, ...chunks, ...(last === null ? [] : [() => last])];
}

function* read(pieces: readonly Piece[]): Generator<Uint8Array> {
  for (const piece of pieces) yield piece();
}

const pieceOf = (pieces: readonly Piece[]) => async (no: number) => pieces[no]?.() ?? null;

/** @throws CheckFailed */
async function checkInParcels(file: readonly Piece[], threads: Threads): Promise<void> {
  const certificate = sha256(file[0]!());
  const shelf = { certificate: pieceOf(file) };
  const opened = await runServed(threads, { kind: 'open', certificate }, shelf).end;
  if (opened.kind === 'not accepted') return accept(opened.checker);
  const spool = new Spool();
  const end = await runCover({
    threads,
    pieces: opened.parcels,
    limitCpuMs: Number.POSITIVE_INFINITY,
    spool,
    shelf,
    makeJob: (piece, checkpoint) => ({
      kind: 'check',
      certificate,
      tree: piece.tree!,
      from: piece.from,
      to: piece.to,
      checkpoint,
      ...PACE_HERE,
    }),
  });
  spool.close();
  const counts = end.counts.map((c) => ({ nodes: c.nodes.toString(), orbits: c.orbits.toString() }));
  accept((await runServed(threads, { kind: 'conclude', certificate, counts }, shelf).end).checker);
}
