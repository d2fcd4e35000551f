import { readFile } from 'node:fs/promises';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase } from '@/models/database';
import { sharedServer } from '../helpers/server';
import { writeSmallStack } from '../helpers/small-stack';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import { launchBrowser, openWindow, signIn, type Visit } from './support/browser';

const server = sharedServer();
let browser: Browser;
let visit: Visit;
let lab: TestLab;
let stack: string;

beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  ({ stack } = await writeSmallStack());
  browser = await launchBrowser();
  visit = await openWindow(browser);
  await signIn(visit.page, lab.people.experimentalist);
}, 120_000);

afterAll(async () => {
  await browser?.close();
  await closeDatabase();
});

/** From last night's cooldown to numbers, by mouse and keyboard; each step leads to the next. */
describe('an experimentalist brings in a recording', () => {
  it('makes a campaign by keyboard', async () => {
    const { page } = visit;
    await page.goto('/campaigns');
    await page.getByRole('button', { name: 'New campaign' }).first().focus();
    await page.keyboard.press('Enter');
    await page.getByLabel('Name').fill('Cooldown of the tests');
    await page.keyboard.press('Enter');
    await page.waitForURL(/\/campaigns\/[0-9a-f-]{36}$/);
    await page.getByRole('heading', { name: 'Cooldown of the tests' }).waitFor();
  });

  it('plans a run, sees what follows at every key, and is told of a slip of the unit', async () => {
    const { page } = visit;
    await page.getByRole('link', { name: 'New run' }).first().click();
    await page.getByLabel('Name of the run').fill('Run 1');
    await page.getByLabel('Temperature', { exact: true }).fill('1.65');
    await page.getByLabel('Heat flux', { exact: true }).fill('100');
    const derived = page.getByRole('group', { name: 'Derived quantities' });
    // Physics: q = 100 mW/cm2 at 1.65 K gives v_ns = 15.44 mm/s (two-fluid model, table of He II at SVP).
    await derived
      .getByText(/15\.\d/)
      .first()
      .waitFor();

    await page.getByLabel('Temperature', { exact: true }).fill('2.30');
    await derived
      .getByText(/lambda point/)
      .first()
      .waitFor();

    await page.getByLabel('Temperature', { exact: true }).fill('0.00185');
    await page.keyboard.press('Tab');
    await page.getByText('Did you mean 1.85 K?').waitFor();
    await page.getByLabel('Temperature', { exact: true }).fill('1.85');
    await page.getByLabel('Heat flux', { exact: true }).fill('30');
    await page.getByLabel('Normal fluid goes').selectOption('right');
    await page.getByLabel('Sheet thickness', { exact: true }).fill('100');
    await page.getByLabel('Frame rate', { exact: true }).fill('250');
    await page.getByLabel('Exposure', { exact: true }).fill('0.5');
    await page.getByLabel('Pixel size', { exact: true }).fill('1,5');
    await page.keyboard.press('Tab');
    await page
      .getByText("Pixel size must be a number above 0 and at most 1000 um (you typed '1,5').")
      .waitFor();
    await page.getByLabel('Pixel size', { exact: true }).fill('8');
    await page
      .getByText(/oxygen-deficiency/)
      .first()
      .waitFor();
    await page.getByRole('button', { name: 'Create run' }).click();
    await page.waitForURL(/\/runs\/[0-9a-f-]{36}\/recordings$/);
  });

  it('uploads a stack and sees it checked', async () => {
    const { page } = visit;
    const chooser = page.waitForEvent('filechooser');
    await page.getByRole('button', { name: 'Choose files' }).click();
    await (await chooser).setFiles(stack);
    const row = page.getByRole('table', { name: 'Recordings' }).getByRole('row', { name: /small\.tif/ });
    await row.getByText('ready').waitFor({ timeout: 60_000 });
    await row.getByRole('link', { name: 'small.tif' }).click();
    await page.waitForURL(/\/recordings\/[0-9a-f-]{36}$/);
    await page.getByText('48 frames, 160 × 160 px').first().waitFor();
  });

  it('tries a recipe on a few frames before paying for all', async () => {
    const { page } = visit;
    await page.getByRole('link', { name: /^Try/ }).first().click();
    const table = page.getByRole('table', { name: 'Spots and noise per frame' });
    await table.waitFor({ timeout: 60_000 });
    expect(await table.getByRole('row').count()).toBeGreaterThan(2);
    await page.goBack();
  });

  it('starts an analysis and reads populations, a PDF, candidates and L with an interval', async () => {
    const { page } = visit;
    await page.getByRole('button', { name: 'Start analysis' }).click();
    await page.waitForURL(/\/analyses\/[0-9a-f-]{36}$/);
    await page.getByRole('heading', { name: 'Populations' }).waitFor({ timeout: 120_000 });
    await page.getByRole('heading', { name: 'Velocity PDF' }).waitFor();
    await page.getByRole('heading', { name: 'Reconnection candidates' }).waitFor();
    const estimates = page.getByRole('table', { name: 'Line density by each method' });
    await estimates.getByRole('row', { name: /Combined/ }).waitFor();
    expect(await estimates.getByText(/±|\d to \d/).count()).toBeGreaterThan(0);
    const tracks = page.getByRole('table', { name: 'Tracks' });
    expect(await tracks.getByRole('row').count()).toBeGreaterThan(10);
  }, 180_000);

  it('scrubs through the frames with their tracks by keyboard', async () => {
    const { page } = visit;
    const line = page.getByRole('slider', { name: /frame/i }).first();
    await line.focus();
    const before = await line.getAttribute('aria-valuenow');
    await page.keyboard.press('ArrowRight');
    expect(await line.getAttribute('aria-valuenow')).not.toBe(before);
  });

  it('downloads the tracks', async () => {
    const { page } = visit;
    const download = page.waitForEvent('download');
    await page.getByRole('link', { name: 'tracks.csv' }).click();
    const text = await readFile(await (await download).path(), 'utf8');
    expect(text.split('\r\n')[0]).toBe(
      'track,frame,t_s,x_px,y_px,x_m,y_m,sx_px,sy_px,brightness,population,p_trapped',
    );
    expect(text.split('\r\n').length).toBeGreaterThan(500);
  });

  it('is complained about by no page', () => {
    expect(visit.complaints).toEqual([]);
  });
});
