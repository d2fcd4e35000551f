import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import { AxeBuilder } from '@axe-core/playwright';
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core';
import { expect } from 'vitest';
import type { LabPerson } from '../../helpers/test-lab';
import { sharedServer } from '../../helpers/server';

/** Debian's browser; as root its sandbox can't work. No traffic of its own: the tests need none. */
export function launchBrowser(): Promise<Browser> {
  const asRoot = process.getuid?.() === 0;
  return chromium.launch({
    executablePath: process.env.TEST_CHROMIUM ?? '/usr/bin/chromium',
    headless: true,
    args: [
      ...(asRoot ? ['--no-sandbox', '--disable-dev-shm-usage'] : []),
      '--disable-gpu',
      '--disable-background-networking',
      '--disable-component-update',
      '--no-first-run',
    ],
  });
}

export const WIDTHS = { wide: { width: 1440, height: 900 }, narrow: { width: 390, height: 844 } } as const;
export type Theme = 'light' | 'dark';

export interface Visit {
  context: BrowserContext;
  page: Page;
  /** What the page complained of in the console, and the address that it was about. */
  complaints: string[];
}

/** A fresh window on the product. */
export async function openWindow(
  browser: Browser,
  options: { size?: keyof typeof WIDTHS; theme?: Theme } = {},
): Promise<Visit> {
  const { baseUrl } = sharedServer();
  const context = await browser.newContext({
    baseURL: baseUrl,
    viewport: WIDTHS[options.size ?? 'wide'],
    reducedMotion: 'reduce',
    acceptDownloads: true,
  });
  if (options.theme) await context.addCookies([{ name: 'theme', value: options.theme, url: baseUrl }]);
  const page = await context.newPage();
  const complaints: string[] = [];
  page.on('console', (message) => {
    if (message.type() === 'error') complaints.push(`${message.text()} (${message.location().url})`);
  });
  page.on('pageerror', (error) => complaints.push(error.message));
  return { context, page, complaints };
}

/** Signs a person in by the form, as people do. */
export async function signIn(page: Page, person: LabPerson): Promise<void> {
  await page.goto('/sign-in');
  await page.getByLabel('E-mail').fill(person.email);
  await page.getByLabel('Password').fill(person.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL((url) => url.pathname === '/');
}

/** A page must never be wider than its window. */
export async function expectNoSidewaysScroll(page: Page): Promise<void> {
  const over = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth);
  expect(over, `${page.url()} is ${over} px wider than its window`).toBeLessThanOrEqual(0);
}

/** axe finds nothing that is serious. All rules but that of contrast are the same in both themes: dark is looked at for it. */
export async function expectNoSeriousViolation(page: Page, theme: Theme, where: string): Promise<void> {
  // No page has a frame, so nothing has to be gathered in a further window.
  const axe = new AxeBuilder({ page }).setLegacyMode().options({ resultTypes: ['violations'] });
  const { violations } = await (theme === 'dark' ? axe.withRules('color-contrast') : axe).analyze();
  const serious = violations.filter(({ impact }) => impact === 'serious' || impact === 'critical');
  const words = serious.map(
    ({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(' ')).join(' | ')}`,
  );
  expect(words, where).toEqual([]);
}

/** A picture of the whole page for people to look at, in the folder that `TEST_SHOTS` names; without it none is made. */
export async function keepPicture(page: Page, name: string): Promise<void> {
  const folder = process.env.TEST_SHOTS;
  if (!folder) return;
  mkdirSync(folder, { recursive: true });
  await page.screenshot({ path: join(folder, name), fullPage: true });
}
