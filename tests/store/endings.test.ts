import { randomBytes } from 'node:crypto';
import { Refusal } from '@palmette/contracts';
import { afterEach, describe, expect, it } from 'vitest';
import { FencedOff, type Lease } from '@palmette/store';
import { foundIn, LETTERS, openFixture, plan, sha256, verdict, written } from './fixture.ts';

const f = await openFixture();
const { store } = f;
afterEach(() => f.clear());

const ines = await f.person('Ines', { workers: 8, cpuSecondsPerDay: 100_000 });
const mei = await f.person('Mei');
const ruben = await f.person('Ruben');
const studyId = await f.study(ines);
await store.studies.putMember(ines, studyId, mei.id, 'coauthor');
await store.studies.putMember(ines, studyId, ruben.id, 'reader');

async function state(id: string) {
  return (await store.questions.view(ines.id, id))!;
}
async function lettersOf(id: string): Promise<string[]> {
  const rows = await f.sql<{ line: string }>(
    `select l.recipient || ' ' || l.ending || ' ' || l.ending_no as line
     from letter l join search s on s.id = l.search_id where s.question_id = $1 order by l.created_at, l.recipient`,
    [id],
  );
  return rows.map((r) => r.line);
}
/** A search of so many parcels, all of them in hand. */
async function running(
  station: string,
  parcels: number,
  budgetCpuMs?: number,
): Promise<{ id: string; leases: Lease[] }> {
  const id = await f.ask(ines, studyId, 'running', budgetCpuMs === undefined ? {} : { budgetCpuMs });
  await plan(store, (await f.claim(station))!, parcels);
  const leases: Lease[] = [];
  for (let i = 0; i < parcels; i += 1) leases.push((await f.claim(station))!);
  return { id, leases };
}

describe('letters', () => {
  it('go to the asker and to members who want them, each once', async () => {
    const station = await f.station();
    await store.people.change(mei.id, { letters: { settled: false, spent: true, broken: true } });
    const id = await f.ask(ines, studyId);
    const lease = (await f.claim(station))!;
    const ends = await Promise.all([1, 2, 3].map(() => store.work.settle(lease.searchId, verdict(), LETTERS)));
    expect(ends.filter(Boolean)).toHaveLength(1);
    expect(await lettersOf(id)).toEqual(['ines@store.example settled 1', 'ruben@store.example settled 1']);

    const broken = await f.ask(ines, studyId);
    await store.work.broken((await f.claim(station))!.searchId, 'a fault', LETTERS);
    expect(await lettersOf(broken)).toEqual([
      'ines@store.example broken 1',
      'mei@store.example broken 1',
      'ruben@store.example broken 1',
    ]);
    expect((await state(broken)).reason).toBe('a fault');
  });

  it('do not go to members who want none, nor to people who are not active', async () => {
    const station = await f.station();
    await f.sql('update member set letters = false where person_id = $1', [ruben.id]);
    await store.people.administer(ines, mei.id, { active: false });
    const id = await f.ask(ines, studyId);
    await store.work.broken((await f.claim(station))!.searchId, 'a fault', LETTERS);
    expect(await lettersOf(id)).toEqual(['ines@store.example broken 1']);
  });

  it('say what the ending was; a fault in the wording does not keep a search from ending', async () => {
    const station = await f.station();
    const id = await f.ask(ines, studyId, 'worded');
    const seen: unknown[] = [];
    await store.work.settle((await f.claim(station))!.searchId, verdict(), (ending) => {
      seen.push(ending);
      throw new Error('no words');
    });
    expect(seen[0]).toMatchObject({
      ending: 'settled',
      verdict: 'embeds',
      ground: 'embedding',
      dimension: 3,
      orbits: '1',
      complete: true,
      question: { id, title: 'worded', sourceLabel: '17/5', studyTitle: 'A study' },
      person: { name: 'Ines', email: 'ines@store.example' },
    });
    expect((await state(id)).state).toBe('settled');
    expect(await lettersOf(id)).toEqual([]);
    expect(f.errors.splice(0)).toHaveLength(1);
  });
});

describe('a budget', () => {
  it('ends the search open when it is used up, loses nothing, and can be extended again and again', async () => {
    const station = await f.station(4);
    const { id, leases } = await running(station, 2, 1_000);
    const [a, b] = leases as [Lease, Lease];
    expect(a.budgetLeftMs).toBe(1_000);
    expect(await store.work.checkpoint(a, written({ checkpoint: 'a1', nodes: 5n, cpuMs: 600 }))).toBe('go on');
    expect(await store.work.checkpoint(b, written({ checkpoint: 'b1', nodes: 5n, cpuMs: 600 }))).toBe('yield');
    const beat = await store.work.heartbeat(station, { busy: 2, memoryBytes: 1, leases });
    expect([...beat.advice.values()]).toEqual(['yield', 'yield']);
    expect(await store.work.spend(a.searchId, 'its budget is used up', LETTERS)).toBe(true);
    expect(await store.work.spend(a.searchId, 'its budget is used up', LETTERS)).toBe(false);
    // the overrun of a thread that had not heard yet is written, not lost
    expect(await store.work.checkpoint(a, written({ checkpoint: 'a2', nodes: 1n, cpuMs: 100 }))).toBe('yield');
    await store.work.release(a);
    await store.work.release(b);
    expect(await state(id)).toMatchObject({ state: 'spent', verdict: 'open', certificate: null, cpuSeconds: 1.3 });
    expect(await f.claim(station)).toBeNull();
    await expect(store.questions.resume(ines, id)).rejects.toMatchObject({ code: 'state' });

    await store.questions.extend(ines, id, 500);
    expect(await state(id)).toMatchObject({ state: 'waiting', reason: null, endedAt: null, budgetCpuSeconds: 1.8 });
    const again = (await f.claim(station))!;
    expect(again).toMatchObject({ checkpoint: 'a2', nodes: 6n, budgetLeftMs: 500 });
    await store.work.checkpoint(again, written({ checkpoint: 'a3', nodes: 1n, cpuMs: 500 }));
    await store.work.release(again);
    // nobody noticed: the sweep ends it
    await store.work.sweep({ leaseSeconds: 60, letters: LETTERS });
    expect((await state(id)).state).toBe('spent');
    expect(await lettersOf(id)).toEqual(['ines@store.example spent 1', 'ines@store.example spent 2']);
    await store.questions.withdraw(ines, id);
    expect((await state(id)).state).toBe('withdrawn');
    await expect(store.questions.extend(ines, id, 500)).rejects.toBeInstanceOf(Refusal);
  });

  it('grows while the search waits, runs or is held; a worker with the old figure does not end it', async () => {
    const station = await f.station(4);
    const { id, leases } = await running(station, 1, 1_000);
    await store.questions.extend(ines, id, 500);
    expect(await state(id)).toMatchObject({ state: 'searching', budgetCpuSeconds: 1.5 });
    expect(await store.work.checkpoint(leases[0]!, written({ checkpoint: 'g', nodes: 1n, cpuMs: 1_200 }))).toBe(
      'go on',
    );
    await store.work.release(leases[0]!);
    expect(await store.work.spend(leases[0]!.searchId, 'used up', LETTERS, true)).toBe(false);
    await store.questions.hold(ines, id);
    await store.questions.extend(ines, id, 500);
    expect(await state(id)).toMatchObject({ state: 'held', budgetCpuSeconds: 2 });
    await store.questions.resume(ines, id);
    const again = (await f.claim(station))!;
    expect(again.budgetLeftMs).toBe(800);
    await store.work.checkpoint(again, written({ checkpoint: 'h', nodes: 1n, cpuMs: 800 }));
    expect(await store.work.spend(again.searchId, 'used up', LETTERS, true)).toBe(true);
    const unlimited = await f.ask(ines, studyId);
    await expect(store.questions.extend(ines, unlimited, 500)).rejects.toMatchObject({ code: 'state' });
  });

  it('that is used up by several workers is handed to one of them, who ends the search', async () => {
    const station = await f.station(4);
    const { leases } = await running(station, 2, 1_000);
    for (const lease of leases) await store.work.checkpoint(lease, written({ checkpoint: 'x', nodes: 1n, cpuMs: 800 }));
    await store.work.release(leases[0]!);
    expect(await f.claim(station)).toBeNull(); // the other still writes
    await store.work.release(leases[1]!);
    const last = (await f.claim(station))!;
    expect(last.budgetLeftMs).toBe(-600);
    expect(await f.claim(station)).toBeNull();
    expect(await store.work.spend(last.searchId, 'used up', LETTERS, true)).toBe(true);
    // its parcel is not in anybody's hand any more
    expect(await f.sql(`select 1 from parcel where search_id = $1 and state = 'leased'`, [last.searchId])).toEqual([]);
    await expect(store.work.release(last)).rejects.toBeInstanceOf(FencedOff);
  });
});

describe('hold', () => {
  it('makes threads yield, keeps what they write, and goes on after resume', async () => {
    const station = await f.station(4);
    const { id, leases } = await running(station, 2);
    await store.questions.hold(ines, id);
    expect(await state(id)).toMatchObject({ state: 'held', heldBy: 'Ines' });
    expect(await store.work.checkpoint(leases[0]!, written({ checkpoint: 'h', nodes: 3n }))).toBe('yield');
    await store.work.release(leases[0]!);
    expect(await f.claim(station)).toBeNull();
    // the other is done before it hears of it
    await store.work.finish(leases[1]!, written({ nodes: 4n }), null);
    expect((await state(id)).state).toBe('held');
    await store.questions.resume(ines, id);
    expect((await state(id)).state).toBe('waiting');
    expect(await f.claim(station)).toMatchObject({ checkpoint: 'h', nodes: 3n });
  });

  it('keeps a verdict back: the last step is done again after resume', async () => {
    const station = await f.station(4);
    const { id, leases } = await running(station, 1);
    expect(await store.work.finish(leases[0]!, written(), null)).toBe(true);
    const assembling = (await f.claim(station))!;
    await store.questions.hold(ines, id);
    expect(await store.work.settle(assembling.searchId, verdict(), LETTERS)).toBe(false);
    await expect(store.work.checkpoint(assembling, written())).rejects.toBeInstanceOf(FencedOff);
    await store.questions.resume(ines, id);
    const again = (await f.claim(station))!;
    expect(again).toMatchObject({ parcelId: assembling.parcelId, phase: 'assembling' });
    expect(await store.work.settle(again.searchId, verdict(), LETTERS)).toBe(true);
  });
});

describe('withdraw', () => {
  it('fences every worker off and keeps what was found', async () => {
    const station = await f.station(4);
    const { id, leases } = await running(station, 2);
    const chunks = [{ records: 2, raw: new TextEncoder().encode('1\n2\n') }];
    await store.work.checkpoint(leases[0]!, written({ checkpoint: 'w', nodes: 3n, orbits: 2n, chunks }));
    await store.questions.withdraw(ines, id);
    const beat = await store.work.heartbeat(station, { busy: 2, memoryBytes: 1, leases });
    expect([...beat.advice.values()]).toEqual(['stop', 'stop']);
    await expect(store.work.finish(leases[0]!, written(), null)).rejects.toBeInstanceOf(FencedOff);
    await expect(plan(store, leases[0]!, 2)).rejects.toBeInstanceOf(FencedOff);
    expect(await state(id)).toMatchObject({ state: 'withdrawn', progress: { orbitsFound: '2', workers: 0 } });
    expect((await foundIn(store, leases[0]!.searchId)).map((chunk) => chunk.records)).toEqual([2]);
    await expect(store.questions.hold(ines, id)).rejects.toMatchObject({ code: 'state' });
  });
});

async function draftOf(searchId: string): Promise<Uint8Array[]> {
  const pieces: Uint8Array[] = [];
  for (let no = 0; ; no += 1) {
    const piece = await store.work.draft(searchId, no);
    if (piece === null) return pieces;
    pieces.push(piece);
  }
}

describe('a certificate', () => {
  it('comes back byte for byte, in pieces of at most 1 MiB', async () => {
    const station = await f.station();
    const id = await f.ask(ines, studyId);
    const raw = [randomBytes(3), randomBytes(2_500_000), new Uint8Array(0), randomBytes(700_000)];
    const certificate = { ...verdict().certificate, raw, sha256: sha256(raw) };
    expect(await store.work.settle((await f.claim(station))!.searchId, verdict('', { certificate }), LETTERS)).toBe(
      true,
    );
    const kept = (await store.questions.certificate(id))!;
    expect(kept).toMatchObject({ sha256: certificate.sha256, bytes: 3_200_003 });
    const chunks = [];
    for await (const chunk of kept.chunks) chunks.push(chunk);
    expect(chunks.map((c) => c.byteLength)).toEqual([1_048_576, 1_048_576, 1_048_576, 3_200_003 - 3 * 1_048_576]);
    expect(sha256(chunks)).toBe(certificate.sha256);
  });

  it('is kept once for two searches of the same question', async () => {
    const station = await f.station();
    const ids = [await f.ask(ines, studyId), await f.ask(ines, studyId)];
    for (let i = 0; i < 2; i += 1)
      expect(await store.work.settle((await f.claim(station))!.searchId, verdict('twice'), LETTERS)).toBe(true);
    const kept = await Promise.all(ids.map((id) => store.questions.certificate(id)));
    expect(kept[0]!.sha256).toBe(kept[1]!.sha256);
    expect(await f.sql('select 1 from certificate where sha256 = $1', [kept[0]!.sha256])).toHaveLength(1);
  });

  it('whose hash is wrong settles nothing', async () => {
    const station = await f.station();
    const id = await f.ask(ines, studyId);
    const { searchId } = (await f.claim(station))!;
    const certificate = { ...verdict().certificate, sha256: sha256([new Uint8Array(1)]) };
    await expect(store.work.settle(searchId, verdict('', { certificate }), LETTERS)).rejects.toThrow('hash');
    expect((await state(id)).state).toBe('searching');
  });

  it('is kept as a draft while it is checked in parcels', async () => {
    const station = await f.station(4);
    const { id, leases } = await running(station, 1);
    await store.work.finish(leases[0]!, written(), null);
    const assembling = (await f.claim(station))!;
    const raw = [randomBytes(1_500_000), randomBytes(300)];
    await store.work.keepDraft(assembling.searchId, await store.work.keepBytes(randomBytes(5)));
    const pieces = [...(await store.work.keepBytes(raw[0]!)), ...(await store.work.keepBytes(raw[1]!))];
    expect(await store.work.keepBytes(raw[0]!)).toEqual(pieces.slice(0, 2)); // a station that begins again
    expect(await draftOf(assembling.searchId)).toHaveLength(1);
    await store.work.keepDraft(assembling.searchId, pieces);
    await store.work.goOn(assembling.searchId, {
      phase: 'checking',
      stage: 1,
      stageResults: '{}',
      facts: {},
      parcels: [
        { from: [0], to: [1], share: 0.5 },
        { from: [1], to: [2], share: 0.5 },
      ],
    });
    expect(sha256(await draftOf(assembling.searchId))).toBe(sha256(raw));
    for (let i = 0; i < 2; i += 1) {
      const checking = (await f.claim(station))!;
      expect(checking).toMatchObject({ phase: 'checking', stage: 1 });
      expect(await store.work.finish(checking, written({ nodes: 7n }), null)).toBe(i === 1);
    }
    const concluding = (await f.claim(station))!;
    expect(concluding.phase).toBe('assembling');
    expect((await store.work.parcels(concluding.searchId, 'checking', 1)).map((p) => p.nodes)).toEqual([7n, 7n]);
    expect(await store.questions.certificate(id)).toBeNull();
    const certificate = { ...verdict().certificate, raw: 'draft', sha256: sha256(raw) } as const;
    expect(await store.work.settle(concluding.searchId, verdict('', { certificate }), LETTERS)).toBe(true);
    expect(await draftOf(concluding.searchId)).toEqual([]);
    const kept = (await store.questions.certificate(id))!;
    expect(kept).toMatchObject({ sha256: sha256(raw), bytes: 1_500_300 });
    const chunks = [];
    for await (const chunk of kept.chunks) chunks.push(chunk);
    expect(sha256(chunks)).toBe(sha256(raw));
  });

  it('of which there is no draft settles nothing', async () => {
    const station = await f.station();
    const id = await f.ask(ines, studyId);
    const { searchId } = (await f.claim(station))!;
    const certificate = { ...verdict().certificate, raw: 'draft' } as const;
    await expect(store.work.settle(searchId, verdict('', { certificate }), LETTERS)).rejects.toThrow('no draft');
    expect((await state(id)).state).toBe('searching');
  });
});
