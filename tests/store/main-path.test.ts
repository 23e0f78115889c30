import { describe, expect, it } from 'vitest';
import { foundIn, LETTERS, openFixture, plan, verdict, written } from './fixture.ts';

const f = await openFixture();
const { store } = f;

describe('the main path through the store', () => {
  it('takes a question from asking to its certificate', async () => {
    const ines = await f.person('Ines');
    const studyId = await f.study(ines);
    const station = await f.station(2);
    const id = await f.ask(ines, studyId, 'P(3, 5, -7)');
    expect(await store.questions.view(ines.id, id)).toMatchObject({
      state: 'waiting',
      verdict: 'open',
      target: { dimension: 3 },
      progress: { phase: 'choosing', place: 1, waitReason: 'turn', parcels: { done: 0, inHand: 0, waiting: 1 } },
    });

    const choosing = (await f.claim(station))!;
    expect(choosing).toMatchObject({ phase: 'choosing', from: [], to: null, attempt: 1, plan: null, alone: false });
    await store.work.checkpoint(choosing, written({ cpuMs: 40 }));
    await plan(store, choosing, 3);

    const first = (await f.claim(station))!;
    expect(first).toMatchObject({ phase: 'listing', stage: 1, from: [], to: [1], plan: '{"revision":1}' });
    const second = (await f.claim(station))!;
    expect(second.from).toEqual([1]);
    expect(await f.claim(station)).toBeNull(); // the cap of two
    const chunk = { records: 1, raw: new TextEncoder().encode('{"a":1}\n') };
    await store.work.checkpoint(
      first,
      written({
        checkpoint: '{"at":[0]}',
        nodes: 70n,
        orbits: 1n,
        cpuMs: 100,
        shareDone: 0.5,
        nodesPerSecond: 700,
        chunks: [chunk],
      }),
    );
    const view = (await store.questions.view(ines.id, id))!;
    expect(view.progress).toMatchObject({
      phase: 'listing',
      nodes: '70',
      orbitsFound: '1',
      workers: 2,
      cpuSeconds: 0.14,
    });
    expect(view.progress.share).toBeCloseTo(0.5 / 3);
    expect(view.progress.remainingCpuSeconds!.likely).toBeCloseTo(((1 - 0.5 / 3) * 1000) / 700);
    expect(view).toMatchObject({ rank: 2, method: 'By rows.', state: 'searching' });
    expect((await store.questions.cover(id)).parcels.map((p) => p.state)).toEqual(['in hand', 'in hand', 'waiting']);

    expect(await store.work.finish({ ...first, chunks: 1 }, written({ nodes: 30n }), null)).toBe(false);
    expect(await store.work.finish(second, written({ nodes: 10n }), null)).toBe(false);
    const third = (await f.claim(station))!;
    expect(third.to).toBeNull();
    expect(await store.work.finish(third, written({ nodes: 5n }), null)).toBe(true);

    const assembling = (await f.claim(station))!;
    expect(assembling).toMatchObject({ phase: 'assembling', stage: 1, stageResults: '{"stage":1}' });
    expect((await store.work.parcels(assembling.searchId, 'listing', 1)).map((p) => p.nodes)).toEqual([100n, 10n, 5n]);
    const found = (await foundIn(store, assembling.searchId)).map(({ records, raw }) => [
      records,
      new TextDecoder().decode(raw),
    ]);
    expect(found).toEqual([[1, '{"a":1}\n']]);
    expect(await store.work.settle(assembling.searchId, verdict(), LETTERS)).toBe(true);
    expect(await store.work.settle(assembling.searchId, verdict(), LETTERS)).toBe(false);

    expect(await store.questions.view(ines.id, id)).toMatchObject({
      state: 'settled',
      verdict: 'embeds',
      total: '48',
      certificate: { checkerLine: 'VERIFIED', bytes: 13 },
    });
    const letters = await store.pool.letters({ limit: 10 });
    expect(letters.items.map((l) => [l.to, l.subject])).toEqual([['ines@store.example', 'settled: P(3, 5, -7)']]);
    expect((await store.studies.list(ines.id, { limit: 10 })).items[0]!.counts).toEqual({
      embeds: 1,
      excluded: 0,
      open: 0,
      searching: 0,
    });
    expect((await store.pool.usage(1))[0]).toMatchObject({ person: 'Ines', cpuSeconds: 0.14 });
    expect((await store.pool.view(ines.id)).yours).toEqual({ busy: 0, running: [], waiting: [] });
    expect(await store.pool.health()).toMatchObject({ database: true, queue: true, stations: 1 });
    expect(f.errors).toEqual([]);
  });
});
