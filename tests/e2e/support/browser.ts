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
  /** What the page complained of in the console. */
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
    if (message.type() === 'error') complaints.push(message.text());
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
