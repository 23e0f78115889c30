import fc from 'fast-check';
import { afterEach, describe, expect, it } from 'vitest';
import type { Lease } from '@palmette/store';
import { foundIn, openFixture, written } from './fixture.ts';

const f = await openFixture();
const { store } = f;
afterEach(() => f.clear());
const ines = await f.person('Ines', { workers: 100, cpuSecondsPerDay: 100_000 });
const studyId = await f.study(ines);

type Piece = { from: readonly number[]; to: readonly number[] | null };

/** The intervals abut from the root to the end of the tree. */
function abuts(pieces: readonly Piece[]): boolean {
  return (
    pieces[0]?.from.length === 0 &&
    pieces.at(-1)?.to === null &&
    pieces.slice(1).every((piece, i) => JSON.stringify(piece.from) === JSON.stringify(pieces[i]!.to))
  );
}

describe('cutting a parcel again', () => {
  it('keeps the cover abutting and its shares whole, wherever the cuts are', async () => {
    const station = await f.station(100);
    await fc.assert(
      fc.asyncProperty(
        fc.array(fc.array(fc.nat({ max: 12 }), { minLength: 1, maxLength: 4 }), { minLength: 1, maxLength: 8 }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        async (cuts, shareKept) => {
          const id = await f.ask(ines, studyId);
          const choosing = (await f.claim(station))!;
          const next = { phase: 'listing', stage: 1, stageResults: '[]', facts: {} } as const;
          await store.work.goOn(choosing.searchId, { ...next, parcels: [{ from: [], to: null, share: 1 }] });
          const leases: Lease[] = [(await f.claim(station))!];
          for (const mid of cuts) {
            for (let i = 0; i < leases.length; i += 1) {
              const cut = await store.work.recut(leases[i]!, mid, shareKept).catch((error: Error) => error);
              if (cut instanceof Error) {
                expect(cut.name).toBe('CutFault'); // it lies in another piece
                continue;
              }
              leases[i] = cut;
              leases.push((await f.claim(station))!);
              break;
            }
          }
          const pieces = await store.work.parcels(choosing.searchId, 'listing', 1);
          expect(abuts(pieces)).toBe(true);
          expect(pieces).toHaveLength(leases.length);
          const { parcels } = await store.questions.cover(id);
          expect(parcels.reduce((sum, p) => sum + p.share, 0)).toBeCloseTo(1);
          for (const [i, lease] of leases.entries())
            expect(await store.work.finish(lease, written(), null)).toBe(i === leases.length - 1);
          await store.questions.withdraw(ines, id);
        },
      ),
      { numRuns: 15 },
    );
  });

  it('keeps what is done of the piece that stays', async () => {
    const station = await f.station(4);
    const id = await f.ask(ines, studyId);
    const choosing = (await f.claim(station))!;
    await store.work.goOn(choosing.searchId, {
      phase: 'listing',
      stage: 1,
      stageResults: '[]',
      facts: {},
      parcels: [{ from: [], to: null, share: 1 }],
    });
    const lease = (await f.claim(station))!;
    await store.work.checkpoint(lease, written({ checkpoint: 'c', shareDone: 0.3, nodes: 1n }));
    await store.work.recut(lease, [5], 0.6);
    const { parcels } = await store.questions.cover(id);
    expect(parcels.map((p) => [p.share, p.done])).toEqual([
      [expect.closeTo(0.6), expect.closeTo(0.5)],
      [expect.closeTo(0.4), 0],
    ]);
    expect((await store.questions.view(ines.id, id))!.progress.share).toBeCloseTo(0.3);
  });
});

describe('what was found', () => {
  it('comes back in address order, whichever parcel was first, and past chunks are overwritten', async () => {
    const station = await f.station(8);
    await f.ask(ines, studyId);
    const choosing = (await f.claim(station))!;
    await store.work.goOn(choosing.searchId, {
      phase: 'listing',
      stage: 1,
      stageResults: '[]',
      facts: {},
      parcels: [
        { from: [], to: [2], share: 0.3 },
        { from: [2], to: [2, 7], share: 0.3 },
        { from: [2, 7], to: [10], share: 0.3 },
        { from: [10], to: null, share: 0.1 },
      ],
    });
    const leases: Lease[] = [];
    for (let i = 0; i < 4; i += 1) leases.push((await f.claim(station))!);
    const chunk = (text: string) => ({ records: 1, raw: new TextEncoder().encode(text) });
    for (const i of [3, 1, 0, 2]) {
      const lease = leases[i]!;
      const chunks = Array.from({ length: 12 }, (_, k) => chunk(`${i}.${k} `));
      await store.work.checkpoint(lease, written({ checkpoint: 'c', nodes: 1n, orbits: 12n, chunks }));
    }
    // a worker that lost its last write writes the same chunk again under the same number
    await store.work.checkpoint(
      { ...leases[0]!, chunks: 11 },
      written({ checkpoint: 'd', nodes: 1n, chunks: [chunk('again ')] }),
    );
    const found = await foundIn(store, choosing.searchId);
    const text = found.map(({ raw }) => new TextDecoder().decode(raw)).join('');
    const expected = [0, 1, 2, 3].flatMap((i) =>
      Array.from({ length: 12 }, (_, k) => (i === 0 && k === 11 ? 'again' : `${i}.${k}`)),
    );
    expect(text.trim().split(' ')).toEqual(expected);
  });
});
