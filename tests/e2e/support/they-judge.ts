import type { Page } from 'playwright-core';
import { beforeAll, expect, it } from 'vitest';
import { makeToken } from '@/auth/tokens';
import { NEXT_CANDIDATE } from '@/components/review/next-candidate-time';
import { scopesOf } from '@/lib/access';
import { newId } from '@/lib/ids';
import type { ListView } from '@/lib/views/common';
import type { ReviewQueueView } from '@/lib/views/review-view';
import { models } from '@/models';
import { execute, selectRows } from '@/models/queries/select';
import { ApiScript } from '../../helpers/api-client';
import { makeCandidates } from '../../helpers/candidates';
import { until } from '../../helpers/until';
import {
  expectNoSeriousViolation,
  expectNoSidewaysScroll,
  keepPicture,
  openWindow,
  signIn,
  type Visit,
  WIDTHS,
} from './browser';
import { analysisId, browser, lab, server } from './review-day';

const COUNT = 30;

/** The window of whoever judges or settles. */
export let visit: Visit;
/** The second reader, who works by a script. */
export let second: ApiScript;

/** Thirty pairs of the tracks that were found, in place of those that the machine thinks of. */
async function meetings(): Promise<void> {
  await execute('DELETE FROM candidates WHERE analysis_id = $1', [analysisId]);
  const tracks = await selectRows<{ number: number; x: number; y: number; first: number }>(
    `SELECT number, mean_x_px AS x, mean_y_px AS y, first_frame AS first FROM tracks
     WHERE analysis_id = $1 AND ended_revision IS NULL ORDER BY points DESC, number LIMIT ${COUNT + 1}`,
    [analysisId],
  );
  expect(tracks.length).toBe(COUNT + 1);
  await makeCandidates(lab, analysisId, COUNT, (event) => {
    const [a, b] = [tracks[event], tracks[event + 1]];
    return {
      trackA: a.number,
      trackB: b.number,
      xPx: (a.x + b.x) / 2,
      yPx: (a.y + b.y) / 2,
      qValue: 0.001 * (event + 1),
    };
  });
}

async function secondReader(): Promise<string> {
  const userId = newId();
  await models().User.create({ id: userId, name: 'Second reader', email: `${userId}@lab.test` });
  await models().Membership.create({ id: newId(), labId: lab.labId, userId, roles: ['annotator'] });
  const { token, tokenHash, hint } = makeToken();
  await models().ApiToken.create({ id: newId(), labId: lab.labId, userId, name: 't', tokenHash, hint, scopes: scopesOf(['annotator']) }); // prettier-ignore
  return token;
}

const heading = (page: Page) => page.getByRole('heading', { level: 1 });
const judged = (page: Page, count: number) =>
  page
    .getByTestId('progress')
    .getByText(`${count} of ${COUNT}`, { exact: false })
    .first()
    .waitFor({ timeout: 60_000 });
const judgements = (readerId: string) =>
  selectRows<{ event: number; verdict: string; reason: string | null; note: string | null; step: number }>(
    `SELECT c.event, v.verdict, v.reason, v.note, v.step FROM verdicts v JOIN candidates c ON c.id = v.candidate_id
     WHERE v.analysis_id = $1 AND v.reader_id = $2 ORDER BY v.created_at, v.step`,
    [analysisId, readerId],
  );

export async function looksRight(page: Page, name: string): Promise<void> {
  await page.waitForFunction(() => document.querySelectorAll('.loading-bars').length === 0, null, {
    timeout: 30_000,
  });
  await keepPicture(page, `${name}.png`);
  await expectNoSidewaysScroll(page);
  await expectNoSeriousViolation(page, 'light', name);
}

/** Reader, second reader, principal investigator; each step leads to the next. */
export function theyJudge(): void {
  beforeAll(async () => {
    await meetings();
    second = new ApiScript(server.baseUrl, await secondReader());
    visit = await openWindow(browser);
    await signIn(visit.page, lab.people.annotator);
  }, 120_000);

  it('thirty of them by keyboard alone, three while the link is lost, each stored once', async () => {
    const { page, context } = visit;
    await page.goto('/review');
    await page.getByRole('link', { name: `Judge ${COUNT}` }).focus();
    await page.keyboard.press('Enter');
    await page.waitForURL(/\/review\/[0-9a-f-]{36}$/);
    await judged(page, 0);
    await heading(page)
      .getByText(/Candidate \d+/)
      .waitFor({ timeout: 60_000 });
    await looksRight(page, 'review-desk-light');

    // Left for later: it comes again at the end.
    const first = await heading(page).textContent();
    await page.keyboard.press('n');
    await page.waitForFunction((before) => document.querySelector('h1')?.textContent !== before, first);

    for (let count = 1; count <= COUNT; count++) {
      if (count === 10) await context.setOffline(true);
      if (count === 13) {
        await page.getByText('Your judgements are kept and sent later.').waitFor({ timeout: 60_000 });
        await context.setOffline(false);
      }
      if (count === 5) {
        await page.keyboard.press('w');
        await page.keyboard.type('a note 123');
        await page.keyboard.press('Escape');
      }
      const way = count % 3;
      await page.keyboard.press(way === 0 ? '2' : way === 1 ? '1' : '3');
      if (way === 0) await page.keyboard.press('c');
      if (way === 2) {
        await page.keyboard.press('f');
        await page.getByLabel('Reason, then Enter').waitFor();
        await page.keyboard.type('no light on it');
        await page.keyboard.press('Enter');
      }
      if (count < COUNT) await judged(page, count);
      // Nobody judges what is not on the screen yet.
      if (count < COUNT)
        await heading(page)
          .getByText(/Candidate \d+/)
          .waitFor({ timeout: 60_000 });
    }
    await page.getByText('That was the last one.').waitFor();
    await until(
      () => judgements(lab.people.annotator.userId),
      (rows) => rows.length >= COUNT,
      { withinMs: 60_000 },
    );
    const rows = await judgements(lab.people.annotator.userId);
    expect(new Set(rows.map(({ event }) => event)).size).toBe(COUNT);
    expect(rows).toHaveLength(COUNT);
    expect(rows.filter(({ verdict }) => verdict === 'yes')).toHaveLength(10);
    expect(rows.filter(({ reason }) => reason === 'the spots merge')).toHaveLength(10);
    expect(rows.filter(({ reason }) => reason === 'no light on it')).toHaveLength(10);
    expect(rows.filter(({ note }) => note === 'a note 123')).toHaveLength(1);
    // What was left for later came last.
    expect(`Candidate ${rows.at(-1)!.event}`).toBe(/Candidate \d+/.exec(first!)![0]);
  }, 240_000);

  it('the time to the next candidate is measured in the browser', async () => {
    const times = await visit.page.evaluate(
      (name) => performance.getEntriesByName(name).map(({ duration }) => duration),
      NEXT_CANDIDATE,
    );
    // The last verdict leads to no candidate.
    expect(times.length).toBe(COUNT - 1);
    const sorted = [...times].sort((a, b) => a - b);
    const at = (share: number) =>
      sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))].toFixed(1);
    process.stdout.write(
      `Next candidate: median ${at(0.5)} ms, 95th percentile ${at(0.95)} ms of ${times.length}.\n`,
    );
  });

  it('a change of mind by keyboard keeps what was said before', async () => {
    const { page } = visit;
    await page.keyboard.press('u');
    await page.getByText('Another verdict takes its place').waitFor({ timeout: 60_000 });
    await page.keyboard.press('1');
    await page.getByText('That was the last one.').waitFor();
    const rows = await until(() => judgements(lab.people.annotator.userId), (all) => all.length > COUNT, { withinMs: 60_000 }); // prettier-ignore
    expect(rows.at(-1)).toMatchObject({ verdict: 'yes', step: 2 });
    expect(
      visit.complaints.filter((text) => !/ERR_INTERNET_DISCONNECTED|Failed to fetch/.test(text)),
    ).toEqual([]);
  });

  it('on a phone the verdicts stand at the foot of the window, the reasons above them', async () => {
    const { context, page } = await openWindow(browser, { size: 'narrow', theme: 'dark' });
    await signIn(page, lab.people.annotator);
    const [{ id }] = await selectRows<{ id: string }>(
      'SELECT id FROM candidates WHERE analysis_id = $1 ORDER BY event LIMIT 1',
      [analysisId],
    );
    await page.goto(`/review/${analysisId}?candidate=${id}`);
    await heading(page)
      .getByText(/Candidate \d+/)
      .waitFor({ timeout: 60_000 });
    const no = page.getByRole('button', { name: /No$/ });
    const foot = await no.boundingBox();
    expect(foot!.y + foot!.height).toBeLessThanOrEqual(WIDTHS.narrow.height);
    expect(foot!.y).toBeGreaterThan(WIDTHS.narrow.height - 80);
    await keepPicture(page, 'review-desk-narrow-dark.png');
    await no.click();
    const reason = await page.getByRole('button', { name: 'the spots merge' }).boundingBox();
    expect(reason!.y + reason!.height).toBeLessThanOrEqual(foot!.y + 1);
    await keepPicture(page, 'review-desk-narrow-reasons-dark.png');
    await expectNoSidewaysScroll(page);
    await expectNoSeriousViolation(page, 'light', 'the desk on a phone');
    await context.close();
  });

  it('a second reader disagrees on two; the principal investigator is told, with the strips, and settles', async () => {
    const { items } = await second.json<ReviewQueueView>(`/api/v1/analyses/${analysisId}/review-queue`);
    const said = new Map(
      (await judgements(lab.people.annotator.userId)).map(({ event, verdict }) => [event, verdict]),
    );
    const other = items.filter(({ event }) => said.get(event) === 'no').slice(0, 2);
    for (const { id, event } of items) {
      const verdict = other.some((one) => one.id === id) ? 'yes' : said.get(event);
      const response = await second.request(`/api/v1/candidates/${id}/verdict`, {
        method: 'PUT',
        headers: { 'Content-Type': 'application/json', 'If-Match': '"1"' },
        body: JSON.stringify({ verdict }),
      });
      expect(response.status).toBe(200);
    }
    const pi = new ApiScript(server.baseUrl, lab.people.principal_investigator.token);
    const strip = await until(
      () => pi.request(`/api/v1/candidates/${other[0].id}/strip`),
      ({ status }) => status === 200,
      { withinMs: 90_000, everyMs: 300 },
    );
    expect(strip.headers.get('content-type')).toBe('image/png');
    expect(
      Buffer.from(await strip.arrayBuffer())
        .subarray(1, 4)
        .toString(),
    ).toBe('PNG');
    const admin = new ApiScript(server.baseUrl, lab.people.lab_administrator.token);
    const mails = await until(
      () => admin.json<ListView<{ kind: string; state: string }>>('/api/v1/mail?q=disagree&limit=200'),
      (list) => list.items.some(({ state }) => state === 'kept'),
      { withinMs: 60_000, everyMs: 300 },
    );
    expect(mails.items.every(({ kind }) => kind === 'review-disagreement')).toBe(true);

    const { page } = (visit = await openWindow(browser, { theme: 'dark' }));
    await signIn(page, lab.people.principal_investigator);
    await page.goto('/review');
    await looksRight(page, 'review-principal-investigator-dark');
    await page
      .getByRole('link', { name: `Settle candidate ${Math.max(...other.map(({ event }) => event))}` })
      .click();
    for (let left = other.length; left > 0; left--) {
      await page.getByText(`${left} candidate`).first().waitFor({ timeout: 60_000 });
      const readings = page.getByRole('complementary');
      await readings.getByText('Second reader').waitFor();
      if (left === 2) await looksRight(page, 'settle-desk-dark');
      await page.getByLabel('Yes', { exact: true }).check();
      await page.getByLabel('Reason').fill('The lines part along the other axis.');
      await page.getByRole('button', { name: 'Settle it' }).click();
    }
    await page.getByText('All is settled.').waitFor();

    const csv = await new ApiScript(server.baseUrl, lab.people.analyst.token).request(`/api/v1/analyses/${analysisId}/reconnections.csv`); // prettier-ignore
    const column = (await csv.text())
      .trim()
      .split('\r\n')
      .slice(1)
      .map((line) => line.split(',').at(-1));
    const expected = Array.from({ length: COUNT }, (_, event) => (other.some((one) => one.event === event) ? 'yes' : said.get(event))); // prettier-ignore
    expect(column).toEqual(expected);
    await page.goto(`/analyses/${analysisId}`);
    const events = expected.filter((verdict) => verdict === 'yes').length;
    await page.getByText(`${events} events confirmed by people`).waitFor({ timeout: 60_000 });
    expect(visit.complaints).toEqual([]);
  }, 240_000);

  it('the report of the campaign shows the frames of events, and a package holds those of all', async () => {
    const { page } = visit;
    const [{ campaignId }] = await selectRows<{ campaignId: string }>(
      `SELECT r.campaign_id AS "campaignId" FROM analyses a JOIN recordings g ON g.id = a.recording_id
         JOIN runs r ON r.id = g.run_id WHERE a.id = $1`,
      [analysisId],
    );
    await page.goto(`/campaigns/${campaignId}/report`);
    const strips = page.getByRole('img', { name: /^Frames around the closest approach of candidate/ });
    await strips.nth(1).waitFor({ timeout: 60_000 });
    await until(
      () => strips.evaluateAll((images) => images.map((image) => (image as HTMLImageElement).naturalWidth)),
      (widths) => widths.length === 2 && widths.every((width) => width > 600),
      { withinMs: 30_000, everyMs: 200 },
    );
    await page.getByText('an event by people’s verdict').first().waitFor();
    await looksRight(page, 'report-of-judged-campaign-dark');

    const pi = new ApiScript(server.baseUrl, lab.people.principal_investigator.token);
    const wish = { title: 'Judged', formats: ['csv'], figures: true, licence: 'CC-BY-4.0', analyses: [analysisId], contributors: [] }; // prettier-ignore
    const { id } = await pi.post<{ id: string }>('/api/v1/exports', wish);
    await until(
      () => pi.json<{ state: string }>(`/api/v1/exports/${id}`),
      ({ state }) => state === 'done',
      { withinMs: 90_000, everyMs: 300 },
    );
    const zip = Buffer.from(await (await pi.request(`/api/v1/exports/${id}/file`)).arrayBuffer());
    const packed = new Set(zip.toString('latin1').match(/analysis-001\/strips\/candidate-\d{4}\.png/g));
    const confirmed = await selectRows<{ event: number }>(
      "SELECT c.event FROM candidates c JOIN candidate_outcomes o ON o.candidate_id = c.id WHERE c.analysis_id = $1 AND o.verdict = 'yes' ORDER BY 1", // prettier-ignore
      [analysisId],
    );
    expect(confirmed.length).toBeGreaterThan(2);
    expect([...packed].sort()).toEqual(
      confirmed.map(({ event }) => `analysis-001/strips/candidate-${String(event).padStart(4, '0')}.png`),
    );
    expect(visit.complaints).toEqual([]);
  }, 180_000);
}
