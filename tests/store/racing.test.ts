/** Several stations at once, each with its own connections, as processes have. */
import { afterEach, describe, expect, it } from 'vitest';
import { FencedOff, type Lease, type Store } from '@palmette/store';
import { LETTERS, openFixture, plan, verdict, written } from './fixture.ts';

const f = await openFixture();
const { store } = f;
afterEach(() => f.clear());

describe('two stations that race', () => {
  it('never run more of a person than the cap, at any instant', async () => {
    const other = await f.another();
    const stores = [store, other];
    const people = [];
    for (const [name, workers] of [
      ['Ada', 1],
      ['Bea', 2],
      ['Cleo', 3],
    ] as const) {
      const person = await f.person(name, { workers, cpuSecondsPerDay: 100_000 });
      const studyId = await f.study(person);
      for (let i = 0; i < 3; i += 1) await f.ask(person, studyId);
      people.push(person);
    }
    const stations = [await f.station(8, store), await f.station(8, other)];
    for (let i = 0; i < 9; i += 1) await plan(store, (await f.claim(stations[0]!))!, 8);

    let over: unknown[] = [];
    let samples = 0;
    let most = 0;
    let racing = true;
    const sampler = (async () => {
      while (racing) {
        const rows = await f.sql<{ n: number; workers: number }>(
          `select count(*)::int as n, a.workers from parcel p join search s on s.id = p.search_id
           join allowance a on a.person_id = s.person_id where p.state = 'leased' group by s.person_id, a.workers`,
        );
        samples += 1;
        most = Math.max(
          most,
          rows.reduce((sum, r) => sum + r.n, 0),
        );
        over = [...over, ...rows.filter((r) => r.n > r.workers)];
      }
    })();
    const worker = async (at: Store, station: string, seed: number) => {
      for (let i = 0; i < 5; i += 1) {
        const leases: Lease[] = [];
        for (let tries = 0; tries < 3; tries += 1) {
          const lease = await f.claim(station, at);
          if (lease !== null) leases.push(lease);
        }
        for (const lease of leases) {
          if ((i + seed) % 3 === 0) await at.work.finish(lease, written({ nodes: 1n, cpuMs: 1 }), null);
          else {
            await at.work.checkpoint(lease, written({ checkpoint: `${i}`, nodes: 1n, cpuMs: 1 }));
            await at.work.release(lease);
          }
        }
      }
    };
    await Promise.all(Array.from({ length: 8 }, (_, i) => worker(stores[i % 2]!, stations[i % 2]!, i)));
    racing = false;
    await sampler;
    expect(over).toEqual([]);
    expect(samples).toBeGreaterThan(20);
    expect(most).toBeGreaterThan(3); // it did race
    // a parcel is never leased twice: every attempt was given out once
    const [counted] = await f.sql<{ cpu: string; nodes: string }>(
      'select (select sum(cpu_ms) from search) as cpu, (select sum(nodes) from parcel) as nodes',
    );
    expect(counted!.cpu).toBe(counted!.nodes);
    expect((await f.sql<{ sum: string }>('select sum(cpu_ms) as sum from usage_day'))[0]!.sum).toBe(counted!.cpu);
  });

  it('end the last parcel of a stage exactly once', async () => {
    const person = await f.person('Once', { workers: 8, cpuSecondsPerDay: 100_000 });
    const studyId = await f.study(person);
    const station = await f.station(8);
    for (let round = 0; round < 10; round += 1) {
      const id = await f.ask(person, studyId);
      await plan(store, (await f.claim(station))!, 6);
      const leases: Lease[] = [];
      for (let i = 0; i < 6; i += 1) leases.push((await f.claim(station))!);
      const last = await Promise.all(leases.map((lease) => store.work.finish(lease, written({ nodes: 2n }), null)));
      expect(last.filter(Boolean)).toHaveLength(1);
      const assembling = await f.sql(
        `select 1 from parcel p join search s on s.id = p.search_id where s.question_id = $1 and p.phase = 'assembling'`,
        [id],
      );
      expect(assembling).toHaveLength(1);
      await store.questions.withdraw(person, id);
    }
  });

  it('find one witness: the others are not needed', async () => {
    const person = await f.person('Witness', { workers: 8, cpuSecondsPerDay: 100_000 });
    const station = await f.station(8);
    const id = await f.ask(person, await f.study(person), 'one', { scope: 'one' });
    await plan(store, (await f.claim(station))!, 5);
    const leases: Lease[] = [];
    for (let i = 0; i < 4; i += 1) leases.push((await f.claim(station))!);
    const ends = await Promise.allSettled(leases.map((lease) => store.work.witness(lease, written({ orbits: 1n }))));
    expect(ends.filter((e) => e.status === 'fulfilled' && e.value)).toHaveLength(1);
    expect(ends.filter((e) => e.status === 'rejected' && e.reason instanceof FencedOff)).toHaveLength(3);
    expect((await f.claim(station))!.phase).toBe('assembling');
    await store.questions.withdraw(person, id);
  });

  it('decide one ending, whatever comes at the same moment', async () => {
    const person = await f.person('Endings', { workers: 8, cpuSecondsPerDay: 100_000 });
    const studyId = await f.study(person);
    const station = await f.station(8);
    const endings = new Map<string, number>();
    for (let round = 0; round < 40; round += 1) {
      const id = await f.ask(person, studyId);
      const lease = (await f.claim(station))!;
      const results = await Promise.allSettled(
        [
          () => store.questions.withdraw(person, id).then(() => 'withdrawn'),
          () => store.work.settle(lease.searchId, verdict(), LETTERS).then((first) => first && 'settled'),
          () => store.work.broken(lease.searchId, 'a fault', LETTERS).then((first) => first && 'broken'),
        ]
          .sort(() => (round % 2 === 0 ? 1 : -1))
          .map((call) => call()),
      );
      const won = results.flatMap((r) => (r.status === 'fulfilled' && r.value ? [r.value] : []));
      expect(won).toHaveLength(1);
      const view = (await store.questions.view(person.id, id))!;
      expect(view.state).toBe(won[0]);
      expect(view.certificate === null).toBe(won[0] !== 'settled');
      expect(view.verdict).toBe(won[0] === 'settled' ? 'embeds' : 'open');
      const letters = await f.sql<{ ending: string }>(
        'select ending from letter l join search s on s.id = l.search_id where s.question_id = $1',
        [id],
      );
      expect(letters.map((l) => l.ending)).toEqual(won[0] === 'withdrawn' ? [] : [won[0]]);
      endings.set(won[0]!, (endings.get(won[0]!) ?? 0) + 1);
    }
    expect(endings.size).toBeGreaterThan(1); // the race had more than one winner
  });

  it('accept a cover once, from whichever worker comes first', async () => {
    const person = await f.person('Cover', { workers: 8, cpuSecondsPerDay: 100_000 });
    const station = await f.station(8);
    const id = await f.ask(person, await f.study(person));
    const lease = (await f.claim(station))!;
    const results = await Promise.allSettled([plan(store, lease, 4), plan(store, lease, 4), plan(store, lease, 4)]);
    expect(results.filter((r) => r.status === 'fulfilled')).toHaveLength(1);
    for (const r of results) if (r.status === 'rejected') expect(r.reason).toBeInstanceOf(FencedOff);
    expect((await store.questions.cover(id)).parcels).toHaveLength(4);
    await store.questions.withdraw(person, id);
  });
});

describe('a worker that was frozen and wakes up', () => {
  it('writes nothing: its lease went to somebody else', async () => {
    const person = await f.person('Frozen', { workers: 8, cpuSecondsPerDay: 100_000 });
    const station = await f.station(8);
    const id = await f.ask(person, await f.study(person));
    await plan(store, (await f.claim(station))!, 1);
    const frozen = (await f.claim(station))!;
    await store.work.checkpoint(frozen, written({ checkpoint: 'early', nodes: 10n }));
    await f.sql(`update parcel set heartbeat_at = now() - interval '1 hour' where id = $1`, [frozen.parcelId]);
    await f.sql(`update station set heard_at = now() - interval '1 hour' where id = $1`, [station]);
    await staleAndSwept();
    const awake = await f.station(8);
    const lease = (await f.claim(awake))!;
    expect(lease).toMatchObject({
      parcelId: frozen.parcelId,
      attempt: frozen.attempt + 1,
      checkpoint: 'early',
      nodes: 10n,
      alone: true,
    });

    const late = [
      store.work.checkpoint(frozen, written({ checkpoint: 'late', nodes: 5n })),
      store.work.finish(frozen, written({ nodes: 5n }), null),
      store.work.witness(frozen, written()),
      store.work.recut(frozen, [3], 0.5),
      store.work.release(frozen),
      store.work.crashed(frozen, 'late', LETTERS),
    ];
    for (const result of await Promise.allSettled(late))
      expect(result.status === 'rejected' && result.reason).toBeInstanceOf(FencedOff);
    const beat = await store.work.heartbeat(station, { busy: 1, memoryBytes: 1, leases: [frozen] });
    expect(beat.advice.get(frozen.parcelId)).toBe('stop');
    expect((await store.work.parcels(lease.searchId, 'listing', 1))[0]).toMatchObject({ nodes: 10n });
    await store.questions.withdraw(person, id);
    await expect(store.work.checkpoint(lease, written())).rejects.toBeInstanceOf(FencedOff);
  });
});

/** The database's own start counts as a sign of life: a lease can be stale only when it has been up for longer. */
async function staleAndSwept(): Promise<void> {
  await f.until('the stale lease is taken back', async () => {
    return (await store.work.sweep({ leaseSeconds: 0.05, letters: LETTERS })).returned > 0;
  });
}
