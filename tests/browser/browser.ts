/** Debian's chromium with playwright-core: one browser for a test file, a fresh context for each person. */
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core';

export async function openBrowser(): Promise<Browser> {
  return chromium.launch({
    executablePath: '/usr/bin/chromium',
    args: [
      '--headless',
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
}

export interface Visit {
  readonly context: BrowserContext;
  readonly page: Page;
  /** Errors that the page wrote to its console or threw. */
  readonly faults: readonly string[];
}

export async function visit(
  browser: Browser,
  options: { readonly width?: number; readonly dark?: boolean } = {},
): Promise<Visit> {
  const context = await browser.newContext({
    viewport: { width: options.width ?? 1440, height: 900 },
    colorScheme: options.dark === true ? 'dark' : 'light',
    acceptDownloads: true,
  });
  const page = await context.newPage();
  const faults: string[] = [];
  page.on('console', (message) => message.type() === 'error' && faults.push(message.text()));
  page.on('pageerror', (error) => faults.push(error.message));
  return { context, page, faults };
}

export async function signInBy(
  page: Page,
  url: string,
  who: { readonly email: string; readonly password: string },
): Promise<void> {
  await page.goto(url);
  await page.getByLabel('E-mail').fill(who.email);
  await page.getByLabel('Password').fill(who.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL((address) => address.pathname.startsWith('/studies'));
}
