import type { Browser, BrowserContext, Page } from 'playwright-core';
import { afterAll, beforeAll, expect } from 'vitest';
import { hashPassword } from '@/auth/password';
import { newId } from '@/lib/ids';
import type { TrackWindowView } from '@/lib/views/analysis-view';
import type { CorrectionList, CorrectionView } from '@/lib/views/correction-view';
import { models } from '@/models';
import { closeDatabase } from '@/models/database';
import { makeAnalysedRecording } from '../../helpers/analysed-recording';
import { ApiScript } from '../../helpers/api-client';
import { sharedServer } from '../../helpers/server';
import { makeTestLab, type LabPerson, type TestLab } from '../../helpers/test-lab';
import { launchBrowser, openWindow, signIn } from './browser';

export const server = sharedServer();
/** Tracks of this length can be split in the middle and still be worked on. */
const LONG_ENOUGH = 8;

export let browser: Browser;
export let lab: TestLab;
export let script: ApiScript;
export let recordingId: string;
export let analysisId: string;
export let people: Annotator[];

export interface LongTrack {
  track: number;
  first: number;
  last: number;
}

/** An annotator at a browser of their own, with tracks that nobody else touches. */
export interface Annotator {
  person: LabPerson;
  context: BrowserContext;
  page: Page;
  complaints: string[];
  tracks: LongTrack[];
}

/** Three annotators at browsers of their own have the same analysis open. */
export function reviewDay(): void {
  beforeAll(async () => {
    lab = await makeTestLab(server.databaseUrl);
    script = new ApiScript(server.baseUrl, lab.people.experimentalist.token);
    const made = await makeAnalysedRecording(script);
    ({ analysisId, recordingId } = made);
    await models().Campaign.update({ readings: 2 }, { where: { id: made.campaignId } });
    const tracks = await longTracks();
    expect(tracks.length).toBeGreaterThan(15);
    const persons = [
      lab.people.annotator,
      await anotherAnnotator('Bo Reyes'),
      await anotherAnnotator('Cy Okoro'),
    ];
    browser = await launchBrowser();
    people = await Promise.all(
      persons.map(async (person, n) => {
        const { context, page, complaints } = await openWindow(browser);
        await signIn(page, person);
        await page.goto(`/analyses/${analysisId}/edit`);
        await page
          .getByRole('row', { name: /trapped|free|undecided/ })
          .first()
          .waitFor();
        return { person, context, page, complaints, tracks: tracks.filter((_, i) => i % 3 === n) };
      }),
    );
  }, 300_000);

  afterAll(async () => {
    await browser?.close();
    await closeDatabase();
  });
}

async function longTracks(): Promise<LongTrack[]> {
  const window = await script.json<TrackWindowView>(`/api/v1/analyses/${analysisId}/tracks?from=0&to=47`);
  return window.tracks
    .map((track, i) => ({ track, first: window.firstFrame![i], last: window.lastFrame![i] }))
    .filter(({ first, last }) => last - first >= LONG_ENOUGH);
}

async function anotherAnnotator(name: string): Promise<LabPerson> {
  const userId = newId();
  const email = `${name.toLowerCase().replace(/\W+/g, '-')}-${userId.slice(-6)}@hollow-reach.test`;
  const password = newId();
  await models().User.create({ id: userId, name, email, passwordHash: await hashPassword(password) });
  await models().Membership.create({ id: newId(), labId: lab.labId, userId, roles: ['annotator'] });
  return { userId, role: 'annotator', name, email, password, token: '' };
}

export const log = async (): Promise<CorrectionView[]> =>
  (await script.json<CorrectionList>(`/api/v1/analyses/${analysisId}/corrections?limit=200&sort=revision`))
    .items;

export const analyst = () => new ApiScript(server.baseUrl, lab.people.analyst.token);
export const annotator = () => new ApiScript(server.baseUrl, lab.people.annotator.token);

export const said = (page: Page) => page.locator('[aria-atomic=true]');

/** Chooses a track by its number and goes to a frame of it, all by keys. */
export async function choose({ page }: Annotator, { track, first }: LongTrack, ahead: number): Promise<void> {
  await page.getByRole('application').focus();
  await page.keyboard.press('n');
  await page.keyboard.type(String(track));
  await page.keyboard.press('Enter');
  await said(page)
    .getByText(new RegExp(`^Track ${spaced(track)},`))
    .waitFor();
  await page.keyboard.press('<');
  for (let n = 0; n < ahead; n += 1) await page.keyboard.press('ArrowRight');
  await page.getByText(`frame ${first + ahead} of 48`).waitFor();
}

/** Numbers are shown in groups of three with thin spaces. */
const spaced = (n: number) =>
  n < 1000 ? String(n) : `${Math.floor(n / 1000)}.${String(n % 1000).padStart(3, '0')}`;

export async function press(annotator: Annotator, key: string, words: RegExp): Promise<void> {
  await annotator.page.keyboard.press(key);
  await said(annotator.page).getByText(words).waitFor();
}

export const stored = ({ page }: Annotator) =>
  page.locator('[data-link=idle][data-waiting="0"]').waitFor({ timeout: 60_000 });
