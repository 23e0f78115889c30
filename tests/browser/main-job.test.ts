/** The main job in a real browser on the built client, with real server, station, database and mail. */
import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { fileURLToPath } from 'node:url';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { signIn } from '../stack/api-client.ts';
import { ADMIN, lettersIn, startStack, until, type Stack } from '../stack/stack.ts';
import { openBrowser, signInBy, visit } from './browser.ts';

const root = fileURLToPath(new URL('../..', import.meta.url));
const axeSource = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');

let database: TestDatabase;
let stack: Stack;
let browser: Browser;

beforeAll(async () => {
  database = await testDatabase();
  stack = await startStack(database);
  await stack.startStation('one', 2);
  browser = await openBrowser();
});
afterAll(async () => {
  await browser?.close();
  await stack?.stop();
  await database?.drop();
});

describe('from a drawn tree to a checked certificate', () => {
  it('draws, asks, watches it settle, downloads, and the checker verifies the file', async () => {
    const { page, context, faults } = await visit(browser);
    await signInBy(page, stack.url, ADMIN);
    await page.goto(`${stack.url}/new`);
    await page.getByText('Tree', { exact: true }).click();
    await page.getByLabel('A chain or a star by its weights or fractions').fill('-4, -2, -3');
    await page.getByRole('button', { name: 'Draw it' }).click();
    await page.getByText('negative definite').first().waitFor();
    expect(await page.getByText('17', { exact: true }).count()).toBeGreaterThan(0);
    await page.getByRole('button', { name: /Settle it|Keep this verdict/ }).click();
    await page.waitForURL(/\/questions\//);
    await page
      .getByRole('heading', { name: /Excluded/ })
      .first()
      .waitFor();
    await page
      .getByText(/VERIFIED rank 3, determinant 17/)
      .first()
      .waitFor();
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('link', { name: /^Certificate/ }).click(),
    ]);
    const file = (await download.path())!;
    const checked = spawnSync(process.execPath, ['docker-free-scripts/palmette.mjs', 'check', file], {
      cwd: root,
      encoding: 'utf8',
      env: { ...process.env, INIT_CWD: root },
    });
    expect(checked.stdout.trimEnd().split('\n').at(-1)).toMatch(
      /^VERIFIED rank 3, determinant 17: does not embed in dimension 3, by determinant$/,
    );
    expect(faults).toEqual([]);
    await context.close();
  });

  it('draws an embedding as a trellis and checks the certificate in the browser', async () => {
    const api = await signIn(stack.url, ADMIN);
    const study = await api.post<{ id: string }>('/studies', { title: 'Trellis' });
    const { id } = await api.post<{ id: string }>(`/studies/${study.id}/questions`, {
      format: 'palmette.question/1',
      source: { kind: 'montesinos', pretzel: [3, 5, -7] },
      target: { least: {} },
      scope: 'all',
    });
    const { page, context, faults } = await visit(browser, { width: 360, dark: true });
    await signInBy(page, stack.url, ADMIN);
    await page.goto(`${stack.url}/questions/${id}`);
    await page
      .getByRole('heading', { name: /Embeds in/ })
      .first()
      .waitFor();
    await page.locator('[role="img"]').first().waitFor();
    await page.getByRole('button', { name: 'Check it here' }).click();
    await until(
      'the checker in the browser says VERIFIED',
      async () => (await page.getByText(/VERIFIED rank 8, determinant 41/).count()) >= 2,
      30,
    );
    expect(await page.evaluate(() => document.documentElement.scrollWidth <= window.innerWidth)).toBe(true);
    expect(faults).toEqual([]);
    await context.close();
  });

  it('asks by a forced method with a second opinion, and the certificate says that two methods agree', async () => {
    const { page, context, faults } = await visit(browser, { width: 360 });
    await signInBy(page, stack.url, ADMIN);
    await page.goto(`${stack.url}/new`);
    await page.getByLabel(/^Source:/).fill('P(3, 5, -7)');
    await page.keyboard.press('Enter');
    await page.getByRole('button', { name: /^the least Z/ }).click();
    // by keyboard alone: open, down to the fourth choice, on to the box
    await page.locator('summary', { hasText: 'Method:' }).focus();
    await page.keyboard.press('Enter');
    await page.keyboard.press('Tab');
    for (let down = 0; down < 3; down += 1) await page.keyboard.press('ArrowDown');
    await page.keyboard.press('Tab');
    await page.keyboard.press('Space');
    await page.getByText('frames, with a second opinion').waitFor();
    await page.getByRole('button', { name: 'Settle it' }).click();
    await page.waitForURL(/\/questions\//);
    await page
      .getByRole('heading', { name: /Embeds in Z9, the least, in exactly one way/ })
      .first()
      .waitFor();
    await page.getByText('two methods agree: rows, frames', { exact: true }).waitFor();
    await page.getByText(/^VERIFIED rank 8, determinant 41.*two methods agree/).waitFor();
    await page.getByText(/Frames, as the question asks\..*Second opinion: rows\./).waitFor();
    await page.getByText(/By frames\. With a second opinion\./).waitFor();

    await page.getByRole('link', { name: 'Restate it' }).click();
    await page.getByText('frames, with a second opinion').waitFor();
    await page.getByRole('button', { name: /^any Z/ }).click();
    await page.getByText('Refused: frames need n from the rank to the rank + 2, found any n.').first().waitFor();
    expect(await page.evaluate(() => document.documentElement.scrollWidth <= window.innerWidth)).toBe(true);
    expect(faults).toEqual([]);
    await context.close();
  });

  it('axe finds nothing on the main pages, wide and narrow, light and dark', async () => {
    const api = await signIn(stack.url, ADMIN);
    const { items } = await api.get<{ items: { id: string }[] }>('/studies');
    const { items: questions } = await api.get<{ items: { id: string }[] }>(`/studies/${items[0]!.id}/questions`);
    for (const options of [{ width: 1440 }, { width: 360, dark: true }]) {
      const { page, context } = await visit(browser, options);
      await signInBy(page, stack.url, ADMIN);
      for (const path of [
        '/studies',
        `/studies/${items[0]!.id}`,
        '/new',
        `/questions/${questions[0]!.id}`,
        '/pool',
        '/account',
        '/admin',
      ]) {
        await page.goto(stack.url + path);
        await page.getByRole('heading').first().waitFor();
        await page.waitForLoadState('networkidle');
        await page.evaluate(axeSource);
        const violations = await page.evaluate(async () => {
          const axe = (
            window as unknown as {
              axe: { run(): Promise<{ violations: { id: string; nodes: { html: string }[] }[] }> };
            }
          ).axe;
          return (await axe.run()).violations.map((v) => `${v.id}: ${v.nodes[0]!.html.slice(0, 160)}`);
        });
        expect({ path, ...options, violations }).toEqual({ path, ...options, violations: [] });
      }
      await context.close();
    }
  });
});

describe('letters', () => {
  it('one letter for each settled search, with verdict, ground and link', async () => {
    const api = await signIn(stack.url, ADMIN);
    const study = await api.post<{ id: string }>('/studies', { title: 'Letters' });
    await stack.mailDown();
    const { id } = await api.post<{ id: string }>(`/studies/${study.id}/questions`, {
      format: 'palmette.question/1',
      title: 'mail outage',
      source: { kind: 'fraction', p: 17, q: 5 },
      target: { least: {} },
      scope: 'all',
    });
    await until(
      'it is settled while mail is away',
      async () => (await api.get<{ state: string }>(`/questions/${id}`)).state === 'settled',
    );
    await stack.mailUp();
    const mine = () => lettersIn(stack.letters).filter((l) => l.text.includes(id));
    await until('its letter arrives', () => mine().length > 0, 90);
    expect(mine()).toHaveLength(1);
    expect(mine()[0]!.text).toMatch(/Embeds in Z\^5/);
    expect(mine()[0]!.text).toMatch(/exhaustion/);
  });
});
