import { readFile } from 'node:fs/promises';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase } from '@/models/database';
import { makeAnalysedRecording } from '../helpers/analysed-recording';
import { ApiScript } from '../helpers/api-client';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import { expectNoSidewaysScroll, launchBrowser, openWindow, signIn, type Visit } from './support/browser';

const server = sharedServer();
const LONG_MS = 120_000;
let browser: Browser;
let lab: TestLab;
let made: Awaited<ReturnType<typeof makeAnalysedRecording>>;

beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  made = await makeAnalysedRecording(new ApiScript(server.baseUrl, lab.people.experimentalist.token));
  browser = await launchBrowser();
}, 240_000);
afterAll(async () => {
  await browser?.close();
  await closeDatabase();
});

/** Chooses the only analysis, builds a package and downloads it. @returns its bytes */
async function buildPackage(page: Page, title: string): Promise<Buffer> {
  await page.getByRole('checkbox', { name: /small\.tif/ }).check();
  await page.getByLabel('Title').fill(title);
  await page.getByRole('button', { name: 'Build the package' }).click();
  const row = page.getByRole('row', { name: new RegExp(title) });
  const link = row.getByRole('link', { name: /Download/ });
  await link.waitFor({ timeout: LONG_MS });
  const download = page.waitForEvent('download');
  await link.click();
  return readFile(await (await download).path());
}

/** Names in the central directory of a ZIP file, as bytes hold them. */
const holds = (zip: Buffer, name: string) => zip.includes(Buffer.from(name));

describe('an analyst', () => {
  let visit: Visit;
  beforeAll(async () => {
    visit = await openWindow(browser);
    await signIn(visit.page, lab.people.analyst);
  }, 60_000);

  it('finds a run by words, with the keyboard', async () => {
    const { page } = visit;
    await page.getByRole('link', { name: 'Search' }).focus();
    await page.keyboard.press('Enter');
    await page.waitForURL(/\/search/);
    await page.getByRole('searchbox').fill('gentle');
    await page.keyboard.press('Enter');
    await page.getByRole('link', { name: 'Run 1, gentle' }).waitFor();
  }, 60_000);

  it('selects by condition, keeps the selection by name, and finds it in the address', async () => {
    const { page } = visit;
    await page.goto('/compare');
    await page.getByText(/^Selection: everything/).click();
    await page.getByLabel('T from').fill('1.5');
    await page.keyboard.press('Enter');
    await page.waitForURL(/temperatureFrom_K=1\.5/);
    await page.getByRole('button', { name: 'Saved selections' }).click();
    await page.getByRole('menuitem', { name: 'Save as …' }).click();
    await page.getByLabel('Name').fill('Warm enough');
    await page.getByRole('button', { name: 'Save', exact: true }).click();
    await page.getByRole('button', { name: 'Warm enough' }).waitFor();
    await page.getByRole('table', { name: 'Runs compared' }).getByRole('link', { name: 'Run 1, gentle' }).waitFor(); // prettier-ignore
  }, 60_000);

  it('leaves a run out only with a reason, which shows, and takes it in again', async () => {
    const { page } = visit;
    await page.getByRole('button', { name: 'Leave out: Run 1, gentle' }).click();
    await page.getByRole('button', { name: 'Leave it out' }).click();
    await page.getByText('Say why the run is left out.').waitFor();
    await page.getByLabel('Reason').fill('The heater was off.');
    await page.getByRole('button', { name: 'Leave it out' }).click();
    await page.getByText(/Left out by .*: The heater was off\./).waitFor();
    await page.getByRole('button', { name: 'Take in again: Run 1, gentle' }).click();
    await page.getByRole('button', { name: 'Take it in again' }).click();
    await page.getByRole('button', { name: 'Leave out: Run 1, gentle' }).waitFor();
  }, 60_000);

  it('sees velocities pooled, courses and profiles of the selection', async () => {
    const { page } = visit;
    for (const [choice, sentence] of [
      ['velocities', /Velocity distribution/],
      ['over time', /over time of/],
      ['profiles', /across the channel of/],
    ] as const) {
      // prettier-ignore
      await page.getByRole('radio', { name: choice, exact: true }).click();
      await page.getByRole('img', { name: sentence }).waitFor();
      await expectNoSidewaysScroll(page);
    }
  }, 60_000);

  it(
    'takes the selection to the exports and downloads a package',
    async () => {
      const { page } = visit;
      await page.getByRole('radio', { name: 'runs', exact: true }).click();
      await page.getByRole('link', { name: 'Put these into a data package' }).click();
      await page.waitForURL(/\/exports\?.*temperatureFrom_K/);
      const zip = await buildPackage(page, 'Package of the analyst');
      for (const name of ['datapackage.json', 'ro-crate-metadata.json', 'analysis-001/tracks.csv', 'analysis-001/profiles.csv', 'analysis-001/figures/']) expect([name, holds(zip, name)]).toEqual([name, true]); // prettier-ignore
      // The browser tells of the one request that was refused: a run left out without a reason.
      expect(visit.complaints).toEqual([expect.stringContaining('422')]);
    },
    LONG_MS,
  );
});

describe('a principal investigator', () => {
  let visit: Visit;
  beforeAll(async () => {
    visit = await openWindow(browser);
    await signIn(visit.page, lab.people.principal_investigator);
  }, 60_000);

  it('reads the report of the campaign, which prints as PDF', async () => {
    const { page } = visit;
    await page.goto(`/campaigns/${made.campaignId}`);
    await page.getByRole('link', { name: 'Report' }).click();
    await page.waitForURL(/\/report$/);
    for (const name of ['Conditions', 'Figures', 'Results', 'Cautions', 'Sign-offs and origin', 'Methods']) {
      await page.getByRole('heading', { name, exact: true }).waitFor();
    }
    await page.getByText(/no: later versions may differ/).waitFor();
    await page.getByRole('img', { name: /Velocity distribution/ }).waitFor();
    const pdf = await page.pdf({ format: 'A4' });
    expect(pdf.subarray(0, 5).toString()).toBe('%PDF-');
    expect(pdf.length).toBeGreaterThan(20_000);
  }, 60_000);

  it(
    'takes its analyses as a data package',
    async () => {
      const { page } = visit;
      await page.getByRole('link', { name: 'Data package' }).click();
      await page.waitForURL(/\/exports\?campaigns=/);
      const zip = await buildPackage(page, 'Package of the investigator');
      expect(holds(zip, 'checksums.sha256')).toBe(true);
      expect(visit.complaints).toEqual([]);
    },
    LONG_MS,
  );
});
