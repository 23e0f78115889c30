import { describe, expect, it } from 'vitest';
import { openFixture } from './fixture.ts';

const f = await openFixture();
const { store } = f;
const ines = await f.person('Ines');
const mei = await f.person('Mei');
const admin = await store.people.create({
  email: 'admin@store.example',
  name: 'Ada',
  role: 'admin',
  passwordHash: 'a',
});

describe('a study', () => {
  it('is seen by its members only, not even by an admin', async () => {
    const id = await f.study(ines, 'Secret');
    const questionId = await f.ask(ines, id);
    for (const other of [mei.id, admin.id]) {
      expect(await store.studies.get(other, id)).toBeNull();
      expect(await store.studies.access(other, id)).toBeNull();
      expect((await store.studies.list(other, { limit: 10 })).items).toEqual([]);
      expect((await store.questions.list(other, id, { limit: 10 })).items).toEqual([]);
      expect(await store.questions.view(other, questionId)).toBeNull();
      expect(await store.questions.byIds(other, [questionId])).toEqual([]);
      expect(await store.questions.progressSeq(other, questionId)).toBeNull();
      for (const steer of ['hold', 'resume', 'withdraw'] as const)
        await expect(store.questions[steer]({ id: other, role: 'admin' }, questionId)).rejects.toMatchObject({
          code: 'not-found',
        });
    }
    await store.studies.putMember(ines, id, mei.id, 'reader');
    expect((await store.questions.view(mei.id, questionId))!.mine).toBe(false);
    await expect(store.questions.withdraw(mei, questionId)).rejects.toMatchObject({ code: 'forbidden' });
    await expect(f.ask(mei, id)).rejects.toMatchObject({ code: 'forbidden' });
    const station = await f.station();
    const lease = (await f.claim(station))!;
    await store.studies.bin(ines, id);
    const beat = await store.work.heartbeat(station, { busy: 1, memoryBytes: 1, leases: [lease] });
    expect(beat.advice.get(lease.parcelId)).toBe('yield'); // nothing of a binned study runs
    await store.work.release(lease);
    expect(await f.claim(station)).toBeNull();
    expect(await store.studies.get(ines.id, id)).toBeNull();
    expect(await store.questions.view(ines.id, questionId)).toBeNull();
  });

  it('keeps at least one lead, also when two leads remove each other at the same moment', async () => {
    const id = await f.study(ines);
    await expect(store.studies.removeMember(ines, id, ines.id)).rejects.toMatchObject({ code: 'conflict' });
    await expect(store.studies.putMember(ines, id, ines.id, 'coauthor')).rejects.toMatchObject({ code: 'conflict' });
    await store.studies.putMember(ines, id, mei.id, 'lead');
    const results = await Promise.allSettled([
      store.studies.removeMember(ines, id, mei.id),
      store.studies.removeMember(mei, id, ines.id),
    ]);
    expect(results.filter((r) => r.status === 'fulfilled')).toHaveLength(1);
    expect((await store.studies.members(id)).filter((m) => m.access === 'lead')).toHaveLength(1);
    await expect(store.studies.removeMember(ines, id, admin.id)).rejects.toMatchObject({ code: 'not-found' });
  });

  it('moves up with every activity', async () => {
    const [first, second] = [await f.study(mei, 'First'), await f.study(mei, 'Second')];
    const titles = async () => (await store.studies.list(mei.id, { limit: 2 })).items.map((s) => s.title);
    expect(await titles()).toEqual(['Second', 'First']);
    await f.ask(mei, first);
    expect(await titles()).toEqual(['First', 'Second']);
    await store.studies.addNote(mei, second, 'seen', null);
    expect(await titles()).toEqual(['Second', 'First']);
    await store.studies.rename(mei, first, 'Firstly');
    expect(await titles()).toEqual(['Firstly', 'Second']);
  });

  it('has notes, of the study and of a question', async () => {
    const id = await f.study(ines);
    const questionId = await f.ask(ines, id);
    const elsewhere = await f.ask(ines, await f.study(ines));
    await store.studies.addNote(ines, id, 'one', null);
    const note = await store.studies.addNote(ines, id, 'two', questionId);
    expect(note).toMatchObject({ text: 'two', by: 'Ines', questionId });
    const texts = async (of: string | null) =>
      (await store.studies.notes(id, of, { limit: 9 })).items.map((n) => n.text);
    expect(await texts(null)).toEqual(['two', 'one']);
    expect(await texts(questionId)).toEqual(['two']);
    expect(await texts('no id')).toEqual([]);
    await expect(store.studies.addNote(ines, id, 'three', elsewhere)).rejects.toMatchObject({ code: 'not-found' });
  });
});

describe('pages', () => {
  it('give every item once, in order, while new ones come', async () => {
    const id = await f.study(ines);
    const asked: string[] = [];
    for (let i = 0; i < 25; i += 1) asked.unshift(await f.ask(ines, id, `no ${i}`));
    // many at the same instant: the id decides
    await f.sql('update question set created_at = date_trunc($1, created_at) where study_id = $2', ['minute', id]);
    const seen: string[] = [];
    let after: string | undefined;
    do {
      const page = await store.questions.list(ines.id, id, { after, limit: 4 });
      expect(page.items.length).toBeLessThanOrEqual(4);
      seen.push(...page.items.map((q) => q.id));
      if (seen.length === 8) await f.ask(ines, id, 'newer than the page');
      after = page.next ?? undefined;
    } while (after !== undefined);
    expect(seen).toHaveLength(25);
    expect(new Set(seen)).toEqual(new Set(asked));
    expect((await store.questions.byIds(ines.id, [asked[3]!, 'x', asked[1]!])).map((q) => q.id)).toEqual([
      asked[3],
      asked[1],
    ]);
  });

  it('end exactly at the last item', async () => {
    const id = await f.study(ines);
    for (let i = 0; i < 4; i += 1) await f.ask(ines, id);
    const page = await store.questions.list(ines.id, id, { limit: 4 });
    expect([page.items.length, page.next]).toEqual([4, null]);
  });

  it.each(['', 'x', 'W10', 'WzEsMl0'])('refuse the cursor %j', async (after) => {
    await expect(store.questions.list(ines.id, crypto.randomUUID(), { after, limit: 4 })).rejects.toMatchObject({
      code: 'shape',
      path: '/after',
    });
  });

  it('of the audit trail and of letters go on likewise', async () => {
    const seen: string[] = [];
    let after: string | undefined;
    do {
      const page = await store.pool.audit({ after, limit: 3 });
      seen.push(...page.items.map((row) => row.id));
      after = page.next ?? undefined;
    } while (after !== undefined);
    const [all] = await f.sql<{ n: string }>('select count(*) as n from audit');
    expect(seen).toHaveLength(Number(all!.n));
    expect(seen).toEqual([...seen].sort((a, b) => Number(b) - Number(a)));
    expect((await store.pool.letters({ limit: 3 })).items).toEqual([]);
  });
});

describe('asking', () => {
  const body = (key: string, bodySha256: string, studyId: string) => ({
    studyId,
    title: null,
    document: '{"target":{"any":true},"scope":"one"}',
    sourceKind: 'matrix',
    sourceLabel: 'matrix 2 × 2',
    budgetCpuMs: null,
    idempotency: { key, bodySha256 },
  });

  it('twice with one key is asking once, also at the same moment', async () => {
    const id = await f.study(ines);
    const made = await Promise.all([1, 2, 3, 4].map(() => store.questions.ask(ines, body('key', 'same', id))));
    expect(new Set(made.map((m) => m.id)).size).toBe(1);
    expect(made.filter((m) => !m.repeated)).toHaveLength(1);
    expect(await store.questions.ask(ines, body('key', 'same', id))).toEqual({ id: made[0]!.id, repeated: true });
    expect(await f.sql('select 1 from question where study_id = $1', [id])).toHaveLength(1);
  });

  it('another question with the same key is refused', async () => {
    const [id, other] = [await f.study(ines), await f.study(ines)];
    await store.questions.ask(ines, body('used', 'one', id));
    await expect(store.questions.ask(ines, body('used', 'two', id))).rejects.toMatchObject({ code: 'conflict' });
    await expect(store.questions.ask(ines, body('used', 'one', other))).rejects.toMatchObject({ code: 'conflict' });
    const theirs = await f.study(mei);
    expect((await store.questions.ask(mei, body('used', 'two', theirs))).repeated).toBe(false);
    await f.sql(`update idempotency set at = now() - interval '8 days' where person_id = $1 and key = 'used'`, [
      ines.id,
    ]);
    expect((await store.questions.ask(ines, body('used', 'two', id))).repeated).toBe(false);
  });

  it('that fails leaves nothing, not even the key', async () => {
    const id = await f.study(ines);
    const broken = { ...body('failing', 'x', id), document: 'no JSON' };
    await expect(store.questions.ask(ines, broken)).rejects.toThrow(SyntaxError);
    expect((await store.questions.ask(ines, body('failing', 'y', id))).repeated).toBe(false);
  });
});
