import { afterEach, describe, expect, it } from 'vitest';
import type { Lease } from '@palmette/store';
import { LETTERS, openFixture, plan, written } from './fixture.ts';

const f = await openFixture();
const { store } = f;
afterEach(() => f.clear());

const ines = await f.person('Ines', { workers: 8, cpuSecondsPerDay: 100_000 });
const studyId = await f.study(ines);

async function running(station: string, parcels: number): Promise<{ id: string; leases: Lease[] }> {
  const id = await f.ask(ines, studyId);
  await plan(store, (await f.claim(station))!, parcels);
  const leases: Lease[] = [];
  for (let i = 0; i < parcels; i += 1) leases.push((await f.claim(station))!);
  return { id, leases };
}
async function stateOf(id: string) {
  return (await store.questions.view(ines.id, id))!;
}
async function crashesOf({ parcelId }: Lease) {
  return (await f.sql('select state, crashes, alone, alone_crashes from parcel where id = $1', [parcelId]))[0];
}
/** The station and its leases fall silent; the sweep is run until it takes back so many. */
async function silence(station: string, parcels: number): Promise<void> {
  await f.sql(`update station set heard_at = now() - interval '1 hour' where id = $1`, [station]);
  await f.sql(`update parcel set heartbeat_at = now() - interval '1 hour' where station_id = $1`, [station]);
  let returned = 0;
  await f.until('the sweep takes back', async () => {
    // all others are heard, so only the silent one is old enough
    returned += (await store.work.sweep({ leaseSeconds: 0.2, letters: LETTERS })).returned;
    return returned === parcels;
  });
}

describe('a crash', () => {
  it('makes the parcel run alone; three while alone without getting on break the search, with a reason', async () => {
    const station = await f.station(2);
    const { id, leases } = await running(station, 1);
    await store.work.crashed(leases[0]!, 'exit 139', LETTERS);
    for (let i = 0; i < 3; i += 1) {
      expect((await stateOf(id)).state).toBe('waiting');
      const alone = (await f.claim(station))!;
      expect(alone).toMatchObject({ alone: true, parcelId: leases[0]!.parcelId });
      await store.work.crashed(alone, 'exit 139', LETTERS);
    }
    const view = await stateOf(id);
    expect(view.state).toBe('broken');
    expect(view.reason).toContain('exit 139');
    expect(await f.claim(station)).toBeNull();
    expect((await store.pool.letters({ limit: 5 })).items.map((l) => l.subject)).toEqual(['broken: A question']);
  });

  it('is forgiven by a new checkpoint', async () => {
    const station = await f.station(2);
    const { id, leases } = await running(station, 1);
    await store.work.crashed(leases[0]!, 'exit 139', LETTERS);
    for (let i = 0; i < 5; i += 1) {
      const lease = (await f.claim(station))!;
      const advice = await store.work.checkpoint(lease, written({ checkpoint: `at ${i}`, nodes: 1n }));
      // it has got on: given back once, it need not run alone any more
      expect(advice).toBe(lease.alone ? 'yield' : 'go on');
      expect(await crashesOf(lease)).toEqual({ state: 'leased', crashes: 0, alone: false, alone_crashes: 0 });
      await store.work.crashed(lease, 'exit 139', LETTERS);
    }
    expect((await stateOf(id)).state).toBe('waiting');
  });

  it('is not forgiven by CPU time without a new place', async () => {
    const station = await f.station(2);
    const { id, leases } = await running(station, 1);
    await store.work.checkpoint(leases[0]!, written({ checkpoint: 'here', nodes: 1n }));
    await store.work.crashed(leases[0]!, 'exit 139', LETTERS);
    for (let i = 0; i < 3; i += 1) {
      const lease = (await f.claim(station))!;
      await store.work.checkpoint(lease, written({ checkpoint: 'here', cpuMs: 5 }));
      await store.work.crashed(lease, 'exit 139', LETTERS);
    }
    expect((await stateOf(id)).state).toBe('broken');
  });
});

describe('a station that is gone', () => {
  it('without a word: each of its parcels runs alone, and the search is not broken', async () => {
    const station = await f.station(4);
    const { id, leases } = await running(station, 3);
    await silence(station, 3);
    for (const lease of leases)
      expect(await crashesOf(lease)).toEqual({ state: 'waiting', crashes: 1, alone: true, alone_crashes: 0 });
    expect((await stateOf(id)).state).toBe('waiting');
    const next = await f.station(4);
    const alone = (await f.claim(next))!;
    expect(alone.alone).toBe(true);
    expect(await f.claim(next, store, false)).toBeNull(); // nothing beside it
    await store.work.checkpoint(alone, written({ checkpoint: 'on', nodes: 1n }));
    await store.work.finish(alone, written(), null);
    expect((await f.claim(next))!.alone).toBe(true);
  });

  it('with a goodbye: its parcels go back without blame, at once', async () => {
    const station = await f.station(4);
    const { leases } = await running(station, 2);
    await store.work.stationStopped(station);
    for (const lease of leases)
      expect(await crashesOf(lease)).toEqual({ state: 'waiting', crashes: 0, alone: false, alone_crashes: 0 });
    expect((await store.pool.stations()).map((s) => s.id)).not.toContain(station);
    await store.work.stationStopped(station); // twice does no harm
  });

  it('or that has only forgotten the parcel: back without blame', async () => {
    const station = await f.station(4);
    const { leases } = await running(station, 1);
    await f.sql(`update parcel set heartbeat_at = now() - interval '1 hour' where id = $1`, [leases[0]!.parcelId]);
    await f.until('the sweep takes it back', async () => {
      await store.work.heartbeat(station, { busy: 0, memoryBytes: 1, leases: [] });
      return (await store.work.sweep({ leaseSeconds: 5, letters: LETTERS })).returned === 1;
    });
    expect(await crashesOf(leases[0]!)).toMatchObject({ state: 'waiting', crashes: 0, alone: false });
  });

  it('is swept once, however many sweep at the same moment', async () => {
    const station = await f.station(4);
    const { leases } = await running(station, 4);
    await f.sql(`update station set heard_at = now() - interval '1 hour' where id = $1`, [station]);
    await f.sql(`update parcel set heartbeat_at = now() - interval '1 hour' where station_id = $1`, [station]);
    const stores = [store, await f.another(), await f.another()];
    const swept = await Promise.all(stores.map((s) => s.work.sweep({ leaseSeconds: 0.2, letters: LETTERS })));
    expect(swept.reduce((sum, s) => sum + s.returned, 0)).toBe(4);
    for (const lease of leases) expect(await crashesOf(lease)).toMatchObject({ crashes: 1, alone: true });
  });

  it('is not gone while its heartbeats come', async () => {
    const station = await f.station(4);
    const { leases } = await running(station, 2);
    await f.sql(`update parcel set heartbeat_at = now() - interval '1 hour' where station_id = $1`, [station]);
    await store.work.heartbeat(station, { busy: 2, memoryBytes: 1, leases });
    expect((await store.work.sweep({ leaseSeconds: 30, letters: LETTERS })).returned).toBe(0);
  });
});

describe('a parcel that has to run alone', () => {
  it('makes a busy station empty itself when its turn comes', async () => {
    const station = await f.station(4);
    const { leases } = await running(station, 3);
    await store.work.crashed(leases[0]!, 'exit 139', LETTERS);
    expect(await f.claim(station, store, false)).toBeNull();
    expect(await store.work.checkpoint(leases[1]!, written())).toBe('yield');
    await store.work.release(leases[1]!);
    expect(await f.claim(station, store, false)).toBeNull(); // nothing new is begun meanwhile
    await store.work.release(leases[2]!);
    const alone = (await f.claim(station))!;
    expect(alone).toMatchObject({ alone: true, parcelId: leases[0]!.parcelId });
    expect(await f.claim(station, store, false)).toBeNull();
    await store.work.finish(alone, written({ nodes: 1n }), null);
    expect(await f.claim(station, store, false)).toMatchObject({ alone: false });
  });

  it('empties one station only', async () => {
    const [first, second] = [await f.station(4), await f.station(4)];
    const { leases } = await running(first, 2);
    await f.ask(ines, studyId);
    const other = (await f.claim(second))!;
    await plan(store, other, 1);
    await f.claim(second);
    await store.work.crashed(leases[0]!, 'exit 139', LETTERS);
    expect(await f.claim(first, store, false)).toBeNull();
    expect(await f.claim(second, store, false)).toBeNull();
    const wanted = await f.sql<{ station_id: string }>(
      `select station_id from parcel where state = 'leased' and yield_wanted`,
    );
    expect(wanted).toEqual([{ station_id: first }]);
  });
});

describe('a spoilt checkpoint', () => {
  it('is not gone on from: the parcel begins again with nothing counted', async () => {
    const station = await f.station(2);
    const { leases } = await running(station, 1);
    await store.work.checkpoint(leases[0]!, written({ checkpoint: 'good', nodes: 9n, orbits: 1n }));
    await store.work.release(leases[0]!);
    await f.sql(`update parcel set checkpoint = 'spoilt' where id = $1`, [leases[0]!.parcelId]);
    expect(await f.claim(station)).toMatchObject({ checkpoint: null, nodes: 0n, orbits: 0n, chunks: 0 });
    expect((await store.work.parcels(leases[0]!.searchId, 'listing', 1))[0]).toMatchObject({ nodes: 0n });
  });
});
