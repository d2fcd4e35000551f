import { afterAll, beforeAll, expect, it } from 'vitest';
import type { CandidateView } from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';
import type { CandidateDetailView } from '@/lib/views/review-view';
import { callJson, webSettings } from '../../helpers/call-route';
import { makeDoneAnalysis } from '../../helpers/corrected-analysis';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

let database: FreshDatabase;
let lab: TestLab;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

it('the film of a candidate has both tracks as they are in its frames, to a hundredth of a pixel', async () => {
  const { path, tracks, measures } = await makeDoneAnalysis(lab);
  const { token } = lab.people.annotator;
  const list = await callJson<ListView<CandidateView>>('GET', `${path}/candidates`, { token });
  const { id, trackA, trackB } = list.body.items[0];
  const { paths } = (await callJson<CandidateDetailView>('GET', `/api/v1/candidates/${id}`, { token })).body;
  expect(paths.map(({ track }) => track)).toEqual([trackA, trackB]);
  for (const one of paths) {
    expect(one.frame.length).toBeGreaterThan(5);
    expect(one.population).toBe(measures.tracks.population[one.track]);
    one.frame.forEach((frame, i) => {
      const at = tracks.start[one.track] + frame - tracks.frame[tracks.start[one.track]];
      expect([tracks.frame[at], one.x[i], one.y[i]]).toEqual([
        frame,
        Math.round(tracks.xPx[at] * 100) / 100,
        Math.round(tracks.yPx[at] * 100) / 100,
      ]);
    });
  }
});
