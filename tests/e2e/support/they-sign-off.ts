import { expect, it } from 'vitest';
import { connect, getSequelize } from '@/models/database';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { ContentHashView } from '@/lib/views/correction-view';
import type { ReviewQueueView } from '@/lib/views/review-view';
import { applicationUrlOf } from '@/scripts/platform/test-cluster.mjs';
import { ApiScript } from '../../helpers/api-client';
import { until } from '../../helpers/until';
import { analysisId, analyst, annotator, lab, log, people, recordingId, script, server } from './review-day';
import { looksRight, second, visit } from './they-judge';

const lead = () => new ApiScript(server.baseUrl, lab.people.principal_investigator.token);
const done = (id = analysisId) =>
  until(
    () => lead().json<AnalysisView>(`/api/v1/analyses/${id}`),
    ({ state, staleSince }) => state === 'done' && staleSince === null,
    { withinMs: 180_000, everyMs: 300 },
  );

/** Results are measured again, once the quiet minute after the last correction is over. */
export function theyWait(): void {
  it('what was measured is measured again on the corrected tracks', async () => {
    const estimates = (query: string) =>
      analyst().text(`/api/v1/analyses/${analysisId}/estimates.json${query}`);
    const before = await estimates('');
    await getSequelize().query(
      "UPDATE job_runs SET not_before = now() WHERE kind = 'remeasure-tracks' AND subject_id = $1",
      { bind: [analysisId] },
    );
    const { summary } = await done();
    const rows = (await analyst().text(`/api/v1/analyses/${analysisId}/tracks.csv`)).trim().split('\r\n');
    expect(summary!.tracks).toBe(new Set(rows.slice(1).map((row) => row.split(',')[0])).size);
    expect(await estimates('?corrections=none')).toBe(before);
    expect(await estimates('')).not.toBe(before);
  }, 240_000);
}

/** The end of the day: nothing of the analysis changes any more, and what was done is carried to a newer one. */
export function theySignOff(): void {
  it('the principal investigator signs off; every page says so', async () => {
    const { page } = visit;
    await page.goto(`/analyses/${analysisId}`);
    await page.getByRole('button', { name: 'Sign off' }).click();
    await page.getByRole('button', { name: 'Sign it off' }).click();
    await page.getByText(/Content SHA-256 [0-9a-f]{64}/).waitFor({ timeout: 60_000 });
    const [ada] = people;
    await ada.page.getByRole('application').focus();
    await ada.page.keyboard.press('.');
    await ada.page.keyboard.press('Delete');
    await ada.page
      .getByText(/signed off/)
      .first()
      .waitFor({ timeout: 60_000 });
    await ada.page
      .getByRole('toolbar', { name: 'Corrections' })
      .waitFor({ state: 'detached', timeout: 60_000 });
  }, 180_000);

  it('after the sign-off nothing gets through: by the API, nor by SQL of the role that the product has', async () => {
    const before = await log();
    const { items } = await second.json<ReviewQueueView>(`/api/v1/analyses/${analysisId}/review-queue`);
    const tries: [ApiScript, string, string, object][] = [
      [
        annotator(),
        'POST',
        `/analyses/${analysisId}/corrections`,
        { kind: 'remove', track: before[0].track },
      ],
      [annotator(), 'POST', `/analyses/${analysisId}/corrections/restore`, { revision: 0 }],
      [second, 'PUT', `/candidates/${items[0].id}/verdict`, { verdict: 'cannot-tell', note: 'too late' }],
      [lead(), 'POST', `/candidates/${items[0].id}/settlement`, { verdict: 'no', reason: 'Too late.' }],
      [lead(), 'POST', `/analyses/${analysisId}/sign-off`, {}],
    ];
    for (const [by, method, path, body] of tries) {
      const url = `/api/v1${path}`;
      const of = path.includes('verdict')
        ? await second.request(url)
        : await lead().request(`/api/v1/analyses/${analysisId}`);
      const revision = path.includes('corrections')
        ? `"${before.length}"`
        : (of.headers.get('etag') ?? '"1"');
      const answer = await by.request(url, {
        method,
        headers: { 'If-Match': revision, 'Content-Type': 'application/json' },
        body: JSON.stringify(body),
      });
      expect([path, answer.status]).toEqual([path, 409]);
      expect(((await answer.json()) as { detail: string }).detail).toMatch(/signed off/);
    }
    const application = connect(applicationUrlOf(server.databaseUrl), { max: 1 });
    try {
      const refusal = (statement: string) =>
        application.query(statement.replaceAll(':id', `'${analysisId}'`)).then(
          () => 'done',
          (error: { original?: { code?: string } }) => error.original?.code,
        );
      expect(await refusal('UPDATE tracks SET population = 0 WHERE analysis_id = :id')).toBe('BL001');
      expect(
        await refusal('UPDATE analyses SET signed_off_at = NULL, content_hash = NULL WHERE id = :id'),
      ).toBe('BL001');
      expect(
        await refusal(`INSERT INTO verdicts (id, lab_id, analysis_id, candidate_id, reader_id, step, verdict, blind)
          SELECT gen_random_uuid(), lab_id, analysis_id, candidate_id, reader_id, 9, 'no', true
          FROM verdicts WHERE analysis_id = :id LIMIT 1`),
      ).toBe('BL001');
      for (const statement of [
        'ALTER TABLE tracks DISABLE TRIGGER ALL',
        'TRUNCATE analyses CASCADE',
        'DELETE FROM verdicts',
      ])
        expect([statement, await refusal(statement)]).toEqual([statement, '42501']);
      // It is the role of this very server.
      const [rows] = await application.query(
        'SELECT count(*)::int AS n FROM pg_stat_activity WHERE datname = current_database() AND usename = current_user AND pid <> pg_backend_pid()',
      );
      expect((rows as { n: number }[])[0].n).toBeGreaterThan(0);
    } finally {
      await application.close();
    }
    expect(await log()).toEqual(before);
    const hash = await lead().json<ContentHashView>(`/api/v1/analyses/${analysisId}/content-hash`);
    expect(hash.same).toBe(true);
  }, 120_000);

  it('what was corrected is carried to a newer analysis, and what could not be is said', async () => {
    const { id } = await script.post<AnalysisView>(`/api/v1/recordings/${recordingId}/analyses`, {
      recipe: { shortestTrackFrames: 6 },
    });
    await done(id);
    const [, bo] = people;
    await bo.page.goto(`/analyses/${id}`);
    await bo.page.getByRole('link', { name: 'See what can be carried here' }).click();
    await bo.page.getByRole('button', { name: 'See what can be carried' }).click();
    const dialog = bo.page.getByRole('dialog');
    await dialog
      .getByText(/can be carried/)
      .first()
      .waitFor({ timeout: 60_000 });
    await looksRight(bo.page, 'carry-corrections-light');
    const label = await dialog.getByRole('button', { name: /^Carry \d/ }).textContent();
    await dialog.getByRole('button', { name: /^Carry \d/ }).click();
    await bo.page.getByText(/were carried|was carried/).waitFor({ timeout: 60_000 });
    const carried = await script.json<AnalysisView>(`/api/v1/analyses/${id}`);
    // What one correction became may be several: pieces of a track that was whole before.
    expect(carried.correctionsRevision).toBeGreaterThanOrEqual(Number(/\d+/.exec(label!)![0]));
    await bo.page.getByText('carried from another analysis of this recording').first().waitFor();
  }, 240_000);
}
