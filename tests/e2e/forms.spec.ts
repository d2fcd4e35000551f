import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ListView } from '@/lib/views/common';
import type { RunView } from '@/lib/views/run-view';
import { models } from '@/models';
import { closeDatabase } from '@/models/database';
import { ApiScript } from '../helpers/api-client';
import { makeRecording } from '../helpers/lab-rows';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import { launchBrowser, openWindow, signIn, type Visit } from './support/browser';

// Rows B32 to B44 of the table of bad inputs as far as a form takes them; tests/api/bad-input.test.ts sends all.

const server = sharedServer();
let browser: Browser;
let visit: Visit;
let lab: TestLab;
let script: ApiScript;
let campaignId: string;

beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  script = new ApiScript(server.baseUrl, lab.people.experimentalist.token);
  browser = await launchBrowser();
  visit = await openWindow(browser);
  await signIn(visit.page, lab.people.experimentalist);
  campaignId = (await script.post<{ id: string }>('/api/v1/campaigns', { name: 'Forms' })).id;
}, 120_000);
afterAll(async () => {
  await browser?.close();
  await closeDatabase();
});

const runs = async () => (await script.json<ListView<RunView>>(`/api/v1/campaigns/${campaignId}/runs`)).items;
const field = (label: string) => visit.page.getByLabel(label, { exact: true });
const create = () => visit.page.getByRole('button', { name: 'Create run' }).click();

describe('a form says what is wrong in one sentence and stores nothing', () => {
  it('B32 values that can not be', async () => {
    const { page } = visit;
    await page.goto(`/campaigns/${campaignId}/runs/new`);
    await field('Name of the run').fill('Run 1');
    for (const typed of ['-3', '0', '1e999', 'NaN']) {
      await field('Pixel size').fill(typed);
      await create();
      await page
        .getByText(`Pixel size must be a number above 0 and at most 1000 um (you typed '${typed}').`)
        .waitFor();
    }
    await field('Pixel size').fill('8');
    await field('Frame interval').or(field('Frame rate')).fill('1,5');
    await create();
    await page.getByText(/you typed '1,5'/).waitFor();
    await field('Frame interval').or(field('Frame rate')).fill('250');
    expect(await runs()).toEqual([]);
  });

  it('B33 a slip of the unit, until it is said to be meant', async () => {
    const { page } = visit;
    await field('Temperature').fill('0.0019');
    await create();
    await page.getByText('Did you mean 1.9 K?').waitFor();
    expect(await runs()).toEqual([]);
    await page.getByLabel('Temperature is meant as typed.').check();
    await field('Temperature').fill('1.9');
  });

  it('B34 names that are too long or hide something, while markup is text', async () => {
    const { page } = visit;
    await field('Name of the run').fill('x'.repeat(201));
    await create();
    await page.getByText('At most 200 characters.').first().waitFor();
    await field('Name of the run').fill('right\u202eleft');
    await create();
    await page.getByText('Hidden or control characters are not accepted in names.').first().waitFor();
    expect(await runs()).toEqual([]);
    await field('Name of the run').fill('<b>Run</b> 1');
  });

  it('F28 a session that ends in the middle of it is signed in again over it, and what was typed is stored', async () => {
    const { page } = visit;
    const { userId, password } = lab.people.experimentalist;
    await field('Notes').fill('Typed before the session ended.');
    await models().User.increment('sessionVersion', { where: { id: userId } });
    await create();
    const dialog = page.getByRole('dialog', { name: 'Your session has ended' });
    await dialog.waitFor();
    expect(await runs()).toEqual([]);
    await dialog.getByLabel('Password').fill(password);
    await dialog.getByRole('button', { name: 'Sign in', exact: true }).click();
    await dialog.waitFor({ state: 'detached' });
    await create();
    await page.waitForURL(/\/runs\/[0-9a-f-]{36}\/recordings$/);
    const [run, ...more] = await runs();
    expect(more).toEqual([]);
    expect(run).toMatchObject({ name: '<b>Run</b> 1', temperature_K: 1.9, pixelSize_m: 8e-6 });
    expect(run.notes).toBe('Typed before the session ended.');
    await page.getByRole('heading', { name: '<b>Run</b> 1' }).waitFor();
  });

  it('B43 of two people who change the same, who comes later chooses; no version is lost unseen', async () => {
    const { page } = visit;
    const [{ id, revision }] = await runs();
    const change = (notes: string, from: number) =>
      script.json<RunView>(`/api/v1/runs/${id}`, {
        method: 'PATCH',
        headers: { 'Content-Type': 'application/json', 'If-Match': `"${from}"` },
        body: JSON.stringify({ notes }),
      });
    await page.goto(`/runs/${id}`);
    await field('Temperature').fill('1.7');
    const theirs = await change('Theirs.', revision);
    await page.getByRole('button', { name: 'Save conditions' }).click();
    const choice = page.getByRole('group', { name: 'Two versions' });
    await choice.waitFor();
    expect((await runs())[0]).toMatchObject({ notes: 'Theirs.', temperature_K: 1.9 });
    await choice.getByRole('button', { name: 'Keep mine' }).click();
    await page.getByText('Conditions saved.').waitFor();
    expect((await runs())[0]).toMatchObject({ temperature_K: 1.7, revision: theirs.revision + 1 });

    await field('Temperature').fill('2.0');
    await change('Theirs again.', theirs.revision + 1);
    await page.getByRole('button', { name: 'Save conditions' }).click();
    await choice.getByRole('button', { name: 'Take theirs' }).click();
    await page.getByText('Theirs again.').waitFor();
    expect(await field('Temperature').inputValue()).toBe('1.7');
  });

  it('B44 a recipe that the recording can not have: the server says what and how much, at the field', async () => {
    const { page } = visit;
    const { labId } = lab;
    const { userId } = lab.people.experimentalist;
    const [{ id: runId }] = await runs();
    const recording = await makeRecording({ labId, userId, campaignId }, { runId });
    await page.goto(`/recordings/${recording.id}`);
    await page.getByText('Recipe', { exact: true }).click();
    const start = page.getByRole('button', { name: 'Start analysis' });
    for (const [label, typed, most] of [
      ['Longest step', '900', 'at most 64'],
      ['Lags', '1, 50', 'at most 39'],
    ] as const) {
      await field(label).fill(typed);
      await start.click();
      await page.getByText(most).waitFor();
      expect(await models().Analysis.count({ where: { recordingId: recording.id } })).toBe(0);
      await field(label).fill('');
    }
  });

  it('B42 an address with a column that no list has shows the list', async () => {
    const { page } = visit;
    expect((await page.goto('/campaigns?sort=nonsense&page=-1&limit=1e9'))?.status()).toBe(200);
    await page.getByRole('link', { name: 'Forms' }).waitFor();
  });
});

describe('where a person is signed in', () => {
  it('stands on the account page; another session can be ended there, and its browser is signed out', async () => {
    const { page } = visit;
    const other = await openWindow(browser);
    await signIn(other.page, lab.people.experimentalist);
    await page.goto('/account');
    const table = page.getByRole('table', { name: 'Sessions' });
    await table.getByText('this one').waitFor();
    const others = table.getByRole('button', { name: 'End' });
    await others.first().waitFor();
    expect(await table.getByText(/Chromium on Linux/).count()).toBeGreaterThanOrEqual(2);
    await others.first().click();
    await others.first().waitFor({ state: 'detached' });
    await other.page.goto('/account');
    await other.page.waitForURL((url) => url.pathname === '/sign-in');
    await page.reload();
    await table.getByText('this one').waitFor();
  });
});
