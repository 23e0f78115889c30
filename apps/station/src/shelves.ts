/**
 * Where a job's long lists lie: in the database, read and written one piece at a time. Each read and each write is tried
 * again through an outage; none of them depends on what came before in this process.
 */
import type { FoundPlace } from '@palmette/store';
import type { Shelf } from '@palmette/threads';
import type { Desk } from './desk.ts';

/** What the parcels of a stage found. */
export function foundShelf({ work, patience }: Desk, searchId: string, stage: number): NonNullable<Shelf['found']> {
  let after: FoundPlace | null = null;
  return async (no) => {
    if (no === 0) after = null;
    const chunk = await patience.untilAnswered('what a stage found', () => work.found(searchId, stage, after));
    if (chunk === null) return null;
    after = chunk.place;
    return chunk.raw;
  };
}

/** The certificate that is being checked. */
export function draftShelf({ work, patience }: Desk, searchId: string): NonNullable<Shelf['certificate']> {
  return (no) => patience.untilAnswered('a certificate in the making', () => work.draft(searchId, no));
}

/** Keeps bytes and notes the hashes of their pieces. Nothing points to them until all are there. */
export async function keepPieces({ work, patience }: Desk, raw: Uint8Array, pieces: string[]): Promise<void> {
  pieces.push(...(await patience.untilAnswered('a piece of a certificate', () => work.keepBytes(raw))));
}
