import { describe, expect, it } from 'vitest';
import { LETTERS, openFixture } from './fixture.ts';

const f = await openFixture();
const { store } = f;
const ines = await f.person('Ines');
const studyId = await f.study(ines);

async function letter(): Promise<void> {
  const station = await f.station();
  await f.ask(ines, studyId);
  await store.work.broken((await f.claim(station))!.searchId, 'a fault', LETTERS);
}
const due = () =>
  f.sql(`update letter set not_before = now() - interval '1 second', claimed_at = now() - interval '1 hour'`);

describe('the outbox', () => {
  it('gives a letter to one sender', async () => {
    await letter();
    const other = await f.another();
    const claimed = await Promise.all([store, other, store, other].map((s) => s.letters.claim()));
    const mine = claimed.filter((c) => c !== null);
    expect(mine).toHaveLength(1);
    expect((await store.pool.letters({ limit: 1 })).items[0]).toMatchObject({ state: 'waiting', attempts: 1 });
    await store.letters.sent(mine[0]!.id, mine[0]!.attempt);
    await due();
    expect(await store.letters.claim()).toBeNull();
    expect((await store.pool.letters({ limit: 1 })).items[0]).toMatchObject({
      state: 'sent',
      sentAt: expect.any(String),
    });
  });

  it('gives it again with the same Message-ID when the sender died; the late sender is fenced off', async () => {
    await letter();
    const first = (await store.letters.claim())!;
    expect(await store.letters.claim()).toBeNull();
    await due();
    const second = (await store.letters.claim())!;
    expect(second).toMatchObject({ id: first.id, messageId: first.messageId, attempt: first.attempt + 1 });
    await store.letters.failed(first.id, first.attempt, 'late', true);
    await store.letters.sent(second.id, second.attempt);
    expect((await store.pool.letters({ limit: 1 })).items[0]).toMatchObject({ state: 'sent', fault: null });
  });

  it('waits longer after each failure, and gives up only when told for good', async () => {
    await letter();
    const waits: number[] = [];
    for (let i = 0; i < 4; i += 1) {
      await due();
      const { id, attempt } = (await store.letters.claim())!;
      await store.letters.failed(id, attempt, 'no connection', false);
      expect(await store.letters.claim()).toBeNull();
      const [row] = await f.sql<{ wait: string }>(
        'select round(extract(epoch from not_before - now()))::text as wait from letter where id = $1',
        [id],
      );
      waits.push(Number(row!.wait));
    }
    expect(waits).toEqual([2, 4, 8, 16]);
    await due();
    const { id, attempt } = (await store.letters.claim())!;
    await store.letters.failed(id, attempt, 'no such mailbox', true);
    await due();
    expect(await store.letters.claim()).toBeNull();
    expect((await store.pool.letters({ limit: 1 })).items[0]).toMatchObject({
      state: 'failed',
      fault: 'no such mailbox',
    });
  });
});
