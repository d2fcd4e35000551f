import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase } from '@/models/database';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import {
  expectNoSeriousViolation,
  expectNoSidewaysScroll,
  keepPicture,
  launchBrowser,
  openWindow,
  signIn,
  type Theme,
  type Visit,
} from './support/browser';

const server = sharedServer();
let browser: Browser;
let visit: Visit;
let lab: TestLab;
let resultPath: string;

beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  browser = await launchBrowser();
  visit = await openWindow(browser);
  await signIn(visit.page, lab.people.experimentalist);
}, 120_000);

afterAll(async () => {
  await browser?.close();
  await closeDatabase();
});

async function look(page: Page, name: string, theme: Theme, axe: boolean) {
  await page.waitForFunction(() => document.querySelectorAll('.loading-bars').length === 0);
  await keepPicture(page, `${name}-${theme}.png`);
  await expectNoSidewaysScroll(page);
  if (axe) await expectNoSeriousViolation(page, theme, `${name} in ${theme}`);
}

describe('an experimentalist rehearses a plan', () => {
  it('types it, is told of what can not be, and finds the draft again after leaving', async () => {
    const { page } = visit;
    await page.goto('/rehearsals');
    await page.getByRole('link', { name: 'New rehearsal' }).first().click();
    await page.getByRole('heading', { name: 'New rehearsal' }).waitFor();
    await page.getByLabel('Frames', { exact: true }).fill('two');
    await page.getByRole('button', { name: 'Start the rehearsal' }).click();
    await page.getByText("Frames must be a whole number from 8 to 5000 (you typed 'two').").first().waitFor();
    await page.getByLabel('Name of the rehearsal').fill('Gentle heat, as planned');
    await page.getByLabel('Frames', { exact: true }).fill('48');
    await page.getByLabel('Width', { exact: true }).first().fill('160');
    await page.getByLabel('Height', { exact: true }).fill('160');
    await page.getByText('draft kept').waitFor();
    await page.goto('/rehearsals/new');
    expect(await page.getByLabel('Name of the rehearsal').inputValue()).toBe('Gentle heat, as planned');
    expect(await page.getByLabel('Frames', { exact: true }).inputValue()).toBe('48');
  });

  it('starts it, sees it come about, and reads what is recovered', async () => {
    const { page, complaints } = visit;
    await page.getByRole('button', { name: 'Start the rehearsal' }).click();
    await page.waitForURL(/\/rehearsals\/[0-9a-f-]{36}$/, { timeout: 60_000 });
    resultPath = new URL(page.url()).pathname;
    await page.getByRole('heading', { name: 'What follows' }).waitFor({ timeout: 180_000 });
    await page.getByText(/of all tracer images are found; \d/).waitFor();
    const populations = page.getByRole('table', { name: /^Populations/ });
    expect(await populations.getByRole('row').count()).toBe(4);
    await page.getByRole('table', { name: /over the true one/ }).waitFor();
    // The draft was sent: the next form is a new one.
    await page.goto('/rehearsals/new');
    expect(await page.getByLabel('Name of the rehearsal').inputValue()).toBe('');
    await page.goto(resultPath);
    await page.getByRole('link', { name: 'the analysis' }).click();
    await page.getByText('Made for a rehearsal').waitFor();
    await page.goto(resultPath);
    await page.getByRole('link', { name: 'Again with changes' }).click();
    await page.getByRole('heading', { name: 'New rehearsal' }).waitFor();
    expect(await page.getByLabel('Frames', { exact: true }).inputValue()).toBe('48');
    expect(complaints).toEqual([]);
  }, 300_000);

  it.each(['light', 'dark'] as const)(
    'in the %s theme, wide and narrow',
    async (theme) => {
      const pages = { rehearsals: '/rehearsals', 'rehearsal-new': '/rehearsals/new', rehearsal: resultPath };
      for (const size of theme === 'light' ? (['wide', 'narrow'] as const) : (['wide'] as const)) {
        const { context, page, complaints } = await openWindow(browser, { theme, size });
        await signIn(page, lab.people.experimentalist);
        for (const [name, path] of Object.entries(pages)) {
          await page.goto(path);
          await page.getByRole('main').waitFor();
          await look(page, `${name}-${size}`, theme, size === 'wide');
        }
        expect(complaints).toEqual([]);
        await context.close();
      }
    },
    180_000,
  );

  it('is only read by an annotator, and is not there for an administrator', async () => {
    const { context, page } = await openWindow(browser);
    await signIn(page, lab.people.annotator);
    await page.goto(resultPath);
    await page.getByRole('heading', { name: 'What follows' }).waitFor();
    expect(await page.getByRole('link', { name: 'Again with changes' }).count()).toBe(0);
    expect((await page.goto('/rehearsals/new'))?.status()).toBe(403);
    await context.close();
    const other = await openWindow(browser);
    await signIn(other.page, lab.people.lab_administrator);
    expect((await other.page.goto(resultPath))?.status()).toBe(403);
    await other.context.close();
  });
});
