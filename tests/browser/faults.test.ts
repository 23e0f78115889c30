/** A long search whose station is killed in the middle, and the cap of one worker, seen from outside. */
import { createHash } from 'node:crypto';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { signIn, type Api } from '../stack/api-client.ts';
import { ADMIN, lettersIn, startStack, until, type Stack } from '../stack/stack.ts';
import { openBrowser, signInBy, visit } from './browser.ts';

/** A dense lattice of rank 8 into Z^10, made at random, by rows: 1,908,537 nodes, 1,260 orbits, some 20 s of CPU with its check. */
const LONG = {
  format: 'palmette.question/1',
  source: {
    kind: 'matrix',
    rows: [
      [7, 3, -3, 0, 0, 0, 2, -3],
      [3, 11, 2, -4, -2, 1, 5, 1],
      [-3, 2, 10, -3, 2, -2, -3, 4],
      [0, -4, -3, 16, 6, 5, 6, -8],
      [0, -2, 2, 6, 13, -3, -1, 0],
      [0, 1, -2, 5, -3, 13, 4, -1],
      [2, 5, -3, 6, -1, 4, 18, -8],
      [-3, 1, 4, -8, 0, -1, -8, 22],
    ],
  },
  target: { excess: 2 },
  scope: 'all',
  method: 'rows',
};

let database: TestDatabase;
let stack: Stack;
let browser: Browser;
let admin: Api;

beforeAll(async () => {
  database = await testDatabase();
  stack = await startStack(database, { QUICK_CPU_MS: '200', QUANTUM_SECONDS: '5' });
  admin = await signIn(stack.url, ADMIN);
  browser = await openBrowser();
});
afterAll(async () => {
  await browser?.close();
  await stack?.stop();
  await database?.drop();
});

interface View {
  readonly state: string;
  readonly verdict: string;
  readonly cpuSeconds: number;
  readonly progress: {
    readonly phase: string;
    readonly nodes: string;
    readonly workers: number;
    readonly parcels: { readonly done: number; readonly inHand: number };
  };
}

const view = (api: Api, id: string) => api.get<View>(`/questions/${id}`);

describe('kill -9 in the middle', () => {
  it('another station goes on from the checkpoint to the same certificate, and one letter arrives', async () => {
    const study = await admin.post<{ id: string }>('/studies', { title: 'Long' });
    const ask = (title: string) => admin.post<{ id: string }>(`/studies/${study.id}/questions`, { ...LONG, title });
    const first = await stack.startStation('first', 2);
    const { id } = await ask('killed in the middle');
    const { page, context } = await visit(browser);
    await signInBy(page, stack.url, ADMIN);
    await page.goto(`${stack.url}/questions/${id}`);
    await page
      .getByRole('heading', { name: /Open: searching/ })
      .first()
      .waitFor({ timeout: 60_000 });
    await until('some parcels are done', async () => (await view(admin, id)).progress.parcels.done >= 4, 90);
    const before = await view(admin, id);
    expect(['searching', 'waiting']).toContain(before.state);
    await first.kill();
    await stack.startStation('second', 2);
    await until('it is settled', async () => (await view(admin, id)).state === 'settled', 240);
    await page
      .getByRole('heading', { name: /Embeds in|Excluded/ })
      .first()
      .waitFor({ timeout: 60_000 });
    const after = await view(admin, id);
    expect(BigInt(after.progress.nodes) >= BigInt(before.progress.nodes)).toBe(true);
    const certificate = await admin.text(`/questions/${id}/certificate`);
    const again = await ask('not killed');
    await until('the undisturbed one is settled', async () => (await view(admin, again.id)).state === 'settled', 240);
    const hash = (text: string) => createHash('sha256').update(text).digest('hex');
    expect(hash(certificate)).toBe(hash(await admin.text(`/questions/${again.id}/certificate`)));
    await until('the letter arrives', () => lettersIn(stack.letters).some((l) => l.text.includes(id)), 60);
    expect(lettersIn(stack.letters).filter((l) => l.text.includes(id))).toHaveLength(1);
    await context.close();
  });
});

describe('the cap of one worker', () => {
  it('two searches of one person never run at once, another person’s go on', async () => {
    const people = await Promise.all(
      ['Bela', 'Cato'].map(async (name) => {
        const email = `${name.toLowerCase()}@stack.example`;
        await admin.post('/people/invitations', { email, name, role: 'researcher' });
        const key = await until(
          `the invitation of ${name}`,
          () =>
            /invitation\/([A-Za-z0-9_-]{20,})/.exec(
              lettersIn(stack.letters).find((l) => l.text.includes(email))?.text ?? '',
            )?.[1],
          60,
        );
        const password = 'a-long-password';
        const fresh = await signIn(stack.url, ADMIN);
        await fresh.post('/invitations/accept', { key, password });
        const api = await signIn(stack.url, { email, password });
        const study = await api.post<{ id: string }>('/studies', { title: name });
        return { name, api, study: study.id };
      }),
    );
    const [bela, cato] = people as [(typeof people)[0], (typeof people)[0]];
    const { page, context } = await visit(browser);
    await signInBy(page, stack.url, ADMIN);
    await page.goto(`${stack.url}/admin`);
    const row = page.locator('tr, li, article, section').filter({ hasText: 'bela@stack.example' }).last();
    await row.waitFor();
    const ids = (await admin.get<{ items: { id: string; email: string }[] }>('/people')).items;
    await admin.put(`/people/${ids.find((p) => p.email === 'bela@stack.example')!.id}/allowance`, {
      workers: 1,
      cpuSecondsPerDay: 36_000,
    });
    await context.close();
    const asked = await Promise.all([
      ...[1, 2].map((n) =>
        bela.api.post<{ id: string }>(`/studies/${bela.study}/questions`, { ...LONG, title: `Bela ${n}` }),
      ),
      cato.api.post<{ id: string }>(`/studies/${cato.study}/questions`, { ...LONG, title: 'Cato' }),
    ]);
    const [one, two, other] = asked as [{ id: string }, { id: string }, { id: string }];
    let most = 0;
    let samples = 0;
    let catoRan = false;
    await until(
      'both have run for a while',
      async () => {
        const [a, b, c] = await Promise.all([view(bela.api, one.id), view(bela.api, two.id), view(cato.api, other.id)]);
        // one look at one instant: two looks at two searches would count a change of turns twice
        most = Math.max(most, (await bela.api.get<{ yours: { busy: number } }>('/pool')).yours.busy);
        catoRan ||= c.progress.workers > 0 || c.state === 'settled';
        samples += 1;
        return samples >= 60 && a.cpuSeconds > 1 && b.cpuSeconds > 1 && catoRan;
      },
      120,
    );
    expect(most).toBe(1);
    expect(catoRan).toBe(true);
    for (const [api, id] of [
      [bela.api, one.id],
      [bela.api, two.id],
      [cato.api, other.id],
    ] as const)
      await api.post(`/questions/${id}/withdraw`).catch(() => undefined);
  });
});
