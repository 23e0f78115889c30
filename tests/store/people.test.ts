import { Refusal } from '@palmette/contracts';
import { describe, expect, it } from 'vitest';
import { openFixture } from './fixture.ts';

const f = await openFixture();
const { store } = f;
const admin = await store.people.create({
  email: 'Admin@Store.example',
  name: 'Ada',
  role: 'admin',
  passwordHash: 'a',
});
const letter = { recipient: 'new@store.example', subject: 'Come in', body: 'with the key' };

describe('invitations', () => {
  it('make a person without password, a link that is used once, and a letter', async () => {
    const invited = await store.people.invite(admin, {
      email: 'New@store.example',
      name: 'Nell',
      role: 'researcher',
      keySha256: 'k1',
      letter,
    });
    expect(invited).toMatchObject({ email: 'new@store.example', passwordHash: null, role: 'researcher', active: true });
    expect(await store.people.keyLink('k1')).toMatchObject({ purpose: 'invitation', person: { id: invited.id } });
    expect((await store.people.listForAdmin()).find((p) => p.id === invited.id)).toMatchObject({ invited: true });
    expect(await store.people.useKeyLink('k1', 'password', 'hash')).toBeNull();
    const uses = await Promise.all(
      [1, 2, 3].map((i) => store.people.useKeyLink('k1', 'invitation', `hash ${i}`, 'Nell B.')),
    );
    const used = uses.filter((u) => u !== null);
    expect(used).toHaveLength(1);
    expect(used[0]).toMatchObject({ name: 'Nell B.', tokenVersion: 1 });
    expect(await store.people.keyLink('k1')).toBeNull();
    expect((await store.people.byEmail('NEW@STORE.EXAMPLE'))!.passwordHash).toMatch(/^hash/);
    expect(await store.people.allowance(invited.id)).toEqual({ workers: 2, cpuSecondsPerDay: 3_600 });

    const sending = (await store.letters.claim())!;
    expect(sending).toMatchObject({ recipient: 'new@store.example', body: 'with the key', attempt: 1 });
    await store.letters.sent(sending.id, sending.attempt);
    // the key does not stay in the database
    expect(await f.sql('select body from letter where id = $1', [sending.id])).toEqual([{ body: '' }]);
  });

  it('refuse an e-mail that is taken, also at the same moment', async () => {
    const invite = (i: number) =>
      store.people.invite(admin, {
        email: 'twice@store.example',
        name: `T${i}`,
        role: 'reader',
        keySha256: `twice ${i}`,
        letter,
      });
    const results = await Promise.allSettled([1, 2, 3].map(invite));
    expect(results.filter((r) => r.status === 'fulfilled')).toHaveLength(1);
    for (const r of results)
      if (r.status === 'rejected') expect(r.reason).toMatchObject({ code: 'conflict', path: '/email' });
    await expect(invite(4)).rejects.toBeInstanceOf(Refusal);
  });

  it('expire', async () => {
    await store.people.invite(admin, {
      email: 'late@store.example',
      name: 'L',
      role: 'reader',
      keySha256: 'late',
      letter,
    });
    await f.sql(`update key_link set expires_at = now() - interval '1 second' where key_sha256 = 'late'`);
    expect(await store.people.keyLink('late')).toBeNull();
    expect(await store.people.useKeyLink('late', 'invitation', 'h')).toBeNull();
  });
});

describe('accounts', () => {
  it('keep choices and passwords; a new password ends sessions and other links', async () => {
    const p = await store.people.create({
      email: 'p@store.example',
      name: 'P',
      role: 'researcher',
      passwordHash: 'old',
    });
    await store.people.forgotten(p.id, 'forgot 1', letter);
    await store.people.forgotten(p.id, 'forgot 2', letter);
    expect(await store.people.useKeyLink('forgot 1', 'password', 'new')).toMatchObject({
      passwordHash: 'new',
      tokenVersion: 1,
    });
    expect(await store.people.keyLink('forgot 2')).toBeNull();
    expect(await store.people.setPassword(p.id, 'newer')).toMatchObject({ passwordHash: 'newer', tokenVersion: 2 });
    const letters = { settled: false, spent: true, broken: false };
    expect(await store.people.change(p.id, { letters, appearance: 'dark' })).toMatchObject({
      letters,
      appearance: 'dark',
      name: 'P',
    });
    await store.people.seen(p.id);
    expect((await store.people.listForAdmin()).find((x) => x.id === p.id)!.lastSeenAt).not.toBeNull();
  });

  it('have tokens that can be revoked, and that end with the account', async () => {
    const p = await store.people.create({ email: 't@store.example', name: 'T', role: 'researcher', passwordHash: 'x' });
    const token = await store.people.makeToken(p.id, 'script', 'hash of a token');
    expect(await store.people.byToken('hash of a token')).toMatchObject({ id: p.id });
    expect((await store.people.tokens(p.id))[0]).toMatchObject({
      id: token.id,
      name: 'script',
      lastUsedAt: expect.any(String),
    });
    expect(await store.people.revokeToken(admin.id, token.id)).toBe(false);
    expect(await store.people.revokeToken(p.id, 'no id')).toBe(false);
    expect(await store.people.revokeToken(p.id, token.id)).toBe(true);
    expect(await store.people.byToken('hash of a token')).toBeNull();
    await store.people.makeToken(p.id, 'second', 'another');
    await store.people.administer(admin, p.id, { active: false });
    expect(await store.people.byToken('another')).toBeNull();
  });

  it('change at once when an admin says so, but the last admin stays', async () => {
    const p = await store.people.create({ email: 'r@store.example', name: 'R', role: 'reader', passwordHash: 'x' });
    expect(await store.people.administer(admin, p.id, { role: 'admin' })).toMatchObject({
      role: 'admin',
      tokenVersion: 1,
    });
    // both take the other's role at the same moment
    const results = await Promise.allSettled([
      store.people.administer(admin, p.id, { role: 'reader' }),
      store.people.administer({ id: p.id, role: 'admin' }, admin.id, { role: 'reader' }),
    ]);
    expect(results.filter((r) => r.status === 'fulfilled')).toHaveLength(1);
    expect((await store.people.listForAdmin()).filter((x) => x.role === 'admin' && x.active)).toHaveLength(1);
    await expect(store.people.administer(admin, crypto.randomUUID(), { active: false })).rejects.toMatchObject({
      code: 'not-found',
    });
    const audit = await store.pool.audit({ limit: 100 });
    expect(audit.items[0]).toMatchObject({ action: 'change person' });
    expect(audit.items.some((row) => row.by === 'Ada' && row.detail === 'reader → admin')).toBe(true);
  });

  it('unknown ids name nobody', async () => {
    expect(await store.people.byId('1')).toBeNull();
    expect(await store.people.byId(crypto.randomUUID())).toBeNull();
    expect(await store.people.byEmail('nobody@store.example')).toBeNull();
  });
});
