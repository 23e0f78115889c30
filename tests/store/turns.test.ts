import { afterEach, describe, expect, it } from 'vitest';
import type { Lease } from '@palmette/store';
import { LETTERS, openFixture, plan, verdict, written } from './fixture.ts';

const f = await openFixture();
const { store } = f;
afterEach(() => f.clear());

/** Settles everything that waits, one after the other, and says whose it was. */
async function drain(station: string): Promise<string[]> {
  const order: string[] = [];
  for (let lease = await f.claim(station); lease !== null; lease = await f.claim(station)) {
    order.push(lease.personId);
    await store.work.settle(lease.searchId, verdict(), LETTERS);
  }
  return order;
}

describe('turns', () => {
  it('one who asks 500 does not starve one who asks 1', async () => {
    const many = await f.person('Many');
    const one = await f.person('One');
    const studyOfMany = await f.study(many);
    const studyOfOne = await f.study(one);
    for (let i = 0; i < 500; i += 1) await f.ask(many, studyOfMany);
    const station = await f.station();
    const first = (await f.claim(station))!;
    expect(first.personId).toBe(many.id);
    const id = await f.ask(one, studyOfOne);
    expect((await store.questions.view(one.id, id))!.progress.place).toBe(1);
    await store.work.settle(first.searchId, verdict(), LETTERS);
    const next = (await f.claim(station))!;
    expect(next.personId).toBe(one.id);
    await store.work.settle(next.searchId, verdict(), LETTERS);
    expect((await f.claim(station))!.personId).toBe(many.id);
  });

  it('says the place that a waiting search then has', async () => {
    const a = await f.person('PlaceA');
    const b = await f.person('PlaceB');
    const [studyA, studyB] = [await f.study(a), await f.study(b)];
    const station = await f.station();
    const ids: [{ id: string }, string][] = [];
    for (let i = 0; i < 3; i += 1) ids.push([a, await f.ask(a, studyA)]);
    for (let i = 0; i < 2; i += 1) ids.push([b, await f.ask(b, studyB)]);
    const place = new Map<string, number>();
    for (const [who, id] of ids) place.set(id, (await store.questions.view(who.id, id))!.progress.place!);
    const order: string[] = [];
    for (let lease = await f.claim(station); lease !== null; lease = await f.claim(station)) {
      const [row] = await f.sql<{ question_id: string }>('select question_id from search where id = $1', [
        lease.searchId,
      ]);
      order.push(row!.question_id);
      await store.work.settle(lease.searchId, verdict(), LETTERS);
    }
    expect(order.map((id) => place.get(id))).toEqual([1, 2, 3, 4, 5]);
  });

  it('passes on between a person’s own searches after each quantum', async () => {
    const own = await f.person('Own', { workers: 1, cpuSecondsPerDay: 3_600 });
    const studyId = await f.study(own);
    await f.ask(own, studyId);
    await f.ask(own, studyId);
    const station = await f.station();
    const searches: string[] = [];
    for (let i = 0; i < 2; i += 1) await plan(store, (await f.claim(station))!, 2);
    for (let i = 0; i < 6; i += 1) {
      const lease = (await f.claim(station))!;
      searches.push(lease.searchId);
      await store.work.release(lease);
    }
    expect(searches.filter((s) => s === searches[0])).toHaveLength(3);
    expect(searches.every((s, i) => i === 0 || s !== searches[i - 1])).toBe(true);
  });
});

describe('a search that has had no quantum', () => {
  it('asks the owner’s own parcel to yield at the cap, and is next', async () => {
    const owner = await f.person('Cap', { workers: 1, cpuSecondsPerDay: 3_600 });
    const studyId = await f.study(owner);
    const station = await f.station(2);
    await f.ask(owner, studyId, 'long');
    await plan(store, (await f.claim(station))!, 4);
    const long = (await f.claim(station))!;
    expect(await store.work.checkpoint(long, written())).toBe('go on');

    const id = await f.ask(owner, studyId, 'short');
    expect(await f.claim(station)).toBeNull();
    expect(await store.work.checkpoint(long, written())).toBe('yield');
    const beat = await store.work.heartbeat(station, { busy: 1, memoryBytes: 1, leases: [long] });
    expect(beat.advice.get(long.parcelId)).toBe('yield');
    await store.work.release(long);
    const short = (await f.claim(station))!;
    expect(short).toMatchObject({ phase: 'choosing' });
    await store.work.settle(short.searchId, verdict(), LETTERS);
    expect((await store.questions.view(owner.id, id))!.state).toBe('settled');
    const again = (await f.claim(station))!;
    expect(again.searchId).toBe(long.searchId);
    await store.questions.withdraw(owner, (await questionOf(again))!);
  });

  it('asks the largest user when all workers are busy, one parcel only', async () => {
    const large = await f.person('Large', { workers: 3, cpuSecondsPerDay: 3_600 });
    const small = await f.person('Small', { workers: 3, cpuSecondsPerDay: 3_600 });
    const fresh = await f.person('Fresh', { workers: 3, cpuSecondsPerDay: 3_600 });
    const station = await f.station(3);
    const leases: Lease[] = [];
    for (const [who, n] of [
      [large, 2],
      [small, 1],
    ] as const) {
      await f.ask(who, await f.study(who), 'long');
      await plan(store, (await f.claim(station))!, n);
      for (let i = 0; i < n; i += 1) leases.push((await f.claim(station))!);
    }
    await f.ask(fresh, await f.study(fresh), 'short');
    for (let i = 0; i < 3; i += 1)
      expect(await store.work.claim(station, { freeWorkers: 0, revisions: [1], canRunAlone: false })).toBeNull();
    const wanted = await f.sql<{ person_id: string }>(
      `select s.person_id from parcel p join search s on s.id = p.search_id where p.state = 'leased' and p.yield_wanted`,
    );
    expect(wanted).toEqual([{ person_id: large.id }]);
    for (const lease of leases)
      await store.questions
        .withdraw({ id: lease.personId, role: 'researcher' }, (await questionOf(lease))!)
        .catch(() => {});
    expect((await drain(station)).includes(fresh.id)).toBe(true);
  });

  it('does not jump again before the others got back what jumping took', async () => {
    const busy = await f.person('Busy');
    const jumper = await f.person('Jumper');
    const station = await f.station();
    await f.ask(busy, await f.study(busy), 'long');
    await plan(store, (await f.claim(station))!, 1);
    const studyId = await f.study(jumper);
    await f.ask(jumper, studyId);
    await f.ask(jumper, studyId);
    const short = (await f.claim(station))!;
    expect(short.personId).toBe(jumper.id);
    await store.work.checkpoint(short, written({ cpuMs: 60_000 }));
    await store.work.settle(short.searchId, verdict(), LETTERS);
    const next = (await f.claim(station))!;
    expect(next.personId).toBe(busy.id);
  });
});

describe('what keeps a search waiting', () => {
  it('is the allowance of the day, by the database’s clock, and never a spent budget', async () => {
    const poor = await f.person('Poor', { workers: 2, cpuSecondsPerDay: 10 });
    const studyId = await f.study(poor);
    const station = await f.station(2);
    const id = await f.ask(poor, studyId);
    await plan(store, (await f.claim(station))!, 3);
    const [a, b] = [(await f.claim(station))!, (await f.claim(station))!];
    expect(await store.work.checkpoint(a, written({ checkpoint: '1', nodes: 1n, cpuMs: 9_000 }))).toBe('go on');
    expect(await store.work.checkpoint(a, written({ checkpoint: '2', nodes: 1n, cpuMs: 1_000 }))).toBe('yield');
    expect(await store.work.checkpoint(b, written())).toBe('yield');
    await store.work.release(a);
    await store.work.release(b);
    expect(await f.claim(station)).toBeNull();
    expect(await store.questions.view(poor.id, id)).toMatchObject({
      state: 'waiting',
      progress: { waitReason: 'allowance', place: null },
    });
    expect((await store.pool.view(poor.id)).cpuSecondsUsedToday).toBe(10);
    // the day after
    await f.sql('update usage_day set day = day - 1 where person_id = $1', [poor.id]);
    expect((await store.work.sweep({ leaseSeconds: 30, letters: LETTERS })).nudged).toBe(1);
    const next = (await f.claim(station))!;
    expect(next).toMatchObject({ searchId: a.searchId, checkpoint: '2' });
    await store.questions.withdraw(poor, id);
  });

  it('is a held pool', async () => {
    const p = await f.person('Held');
    const station = await f.station();
    const id = await f.ask(p, await f.study(p));
    await store.pool.holdPool(p, true);
    expect(await f.claim(station)).toBeNull();
    expect((await store.questions.view(p.id, id))!.progress.waitReason).toBe('pool');
    await store.pool.holdPool(p, false);
    const lease = (await f.claim(station))!;
    expect(lease.personId).toBe(p.id);
    await store.pool.holdPool(p, true);
    const beat = await store.work.heartbeat(station, { busy: 1, memoryBytes: 1, leases: [lease] });
    expect(beat.advice.get(lease.parcelId)).toBe('yield');
    await store.pool.holdPool(p, false);
    await store.questions.withdraw(p, id);
  });

  it('is a station that stands by', async () => {
    const p = await f.person('Standing');
    const station = await f.station();
    await f.ask(p, await f.study(p));
    expect(await store.pool.standBy(p, station, true)).toBe(true);
    expect(await f.claim(station)).toBeNull();
    expect((await store.work.heartbeat(station, { busy: 0, memoryBytes: 1, leases: [] })).standBy).toBe(true);
    expect((await store.pool.stations()).find((s) => s.id === station)!.state).toBe('standing by');
    await store.pool.standBy(p, station, false);
    expect((await f.claim(station))!.personId).toBe(p.id);
  });

  it('is a method that the station does not know', async () => {
    const p = await f.person('Revision');
    const station = await f.station();
    await f.ask(p, await f.study(p));
    const choosing = (await f.claim(station))!;
    await store.work.goOn(choosing.searchId, {
      phase: 'listing',
      stage: 1,
      stageResults: '[]',
      facts: { plan: '{"revision":2}' },
      parcels: [{ from: [], to: null, share: 1 }],
    });
    expect(await f.claim(station)).toBeNull();
    expect(await store.work.claim(station, { freeWorkers: 1, revisions: [1, 2], canRunAlone: true })).not.toBeNull();
  });

  it('is a cap that was lowered: what runs above it is asked to yield', async () => {
    const p = await f.person('Lowered', { workers: 3, cpuSecondsPerDay: 3_600 });
    const station = await f.station(3);
    await f.ask(p, await f.study(p));
    await plan(store, (await f.claim(station))!, 3);
    const leases = [(await f.claim(station))!, (await f.claim(station))!, (await f.claim(station))!];
    await store.people.setAllowance(p, p.id, { workers: 1, cpuSecondsPerDay: 3_600 });
    const advice = [];
    for (const lease of leases) advice.push(await store.work.checkpoint(lease, written()));
    expect(advice).toEqual(['go on', 'yield', 'yield']);
  });
});

async function questionOf({ searchId }: Lease): Promise<string | undefined> {
  return (await f.sql<{ question_id: string }>('select question_id from search where id = $1', [searchId]))[0]
    ?.question_id;
}
