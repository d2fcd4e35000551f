import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { estimatesJson } from '@/lib/tables/estimates-json';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import { tableTracks } from '@/lib/tables/track-rows';
import { tracksCsv } from '@/lib/tables/tracks-csv';
import { velocitiesCsv } from '@/lib/tables/velocities-csv';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import { newId } from '@/lib/ids';
import * as views from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';
import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import { getSequelize } from '@/models/database';
import { finishAnalysis, saveMeasures } from '@/models/queries/analysis-outcome';
import { writeTrackMeasures, writeTracks } from '@/models/queries/write-tracks';
import { measureFlow } from '@/tracking/measure-flow';
import { RECIPE_DEFAULTS } from '@/tracking/recipe';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import type { Recipe } from '@/tracking/types';
import { call, callJson, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeAnalysis, type LabRows } from '../../helpers/lab-rows';
import { makeTestLab } from '../../helpers/test-lab';

const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 0.005, sheetThickness_m: 2e-4, temperature_K: 1.85 };
const RECIPE: Recipe = {
  ...RECIPE_DEFAULTS,
  lagsFrames: [1, 4],
  bootstrapDraws: 100,
  spotSizePx: 1,
  gain: 2,
  readNoise_e: 1.5,
  closestApproach_m: 4e-5,
};
const scene = tangleScene({
  widthPx: 200,
  heightPx: 200,
  frames: 80,
  pixelSizeM: 1e-5,
  frameIntervalS: 0.005,
  sheetThicknessM: 2e-4,
  lineDensityM2: 1e7,
  beadsPerMetre: 5000,
  freeTracersPerFrame: 30,
  vnMPerS: 4e-3,
  tangleVelocityMPerS: -1e-3,
  events: 3,
  seed: 2,
});
const { tracks } = trueTracks(scene, { sigmaPx: 0.12, seed: 1, shortestTrackFrames: 3 });
const measures = measureFlow(tracks, { width: 200, height: 200, frames: 80 }, CONDITIONS, RECIPE);

let database: FreshDatabase;
let token: string;
let lab: LabRows;
let analysis: Analysis;
let path: string;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  const made = await makeTestLab(database.url);
  const { userId } = made.people.analyst;
  ({ token } = made.people.analyst);
  const campaign = await models().Campaign.create({
    id: newId(),
    labId: made.labId,
    name: 'C',
    createdBy: userId,
  });
  lab = { labId: made.labId, userId, campaignId: campaign.id };
  analysis = await makeAnalysis(lab, {
    conditions: CONDITIONS,
    recipe: RECIPE,
    frames: 80,
    spotsPerFrame: [3, 4],
  });
  path = `/api/v1/analyses/${analysis.id}`;
  await getSequelize().transaction(async (transaction) => {
    await writeTracks(analysis.id, tracks, transaction);
    await writeTrackMeasures(analysis.id, measures.tracks, transaction);
    await saveMeasures(lab.labId, analysis.id, 0, measures, transaction);
    const { counts } = measures.populations;
    const summary = { spots: 7, tracks: tracks.count, trackPoints: tracks.frame.length, bridgedPoints: 0, ...counts, candidates: 0, acceptedCandidates: 0 }; // prettier-ignore
    await finishAnalysis(analysis.id, summary, transaction);
  });
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

const get = <T>(below: string) => callJson<T>('GET', `${path}${below}`, { token });

describe('tables', () => {
  it.each([
    [
      'tracks.csv',
      () =>
        [...tracksCsv(tableTracks(tracks, measures.tracks, measures.details.segments), CONDITIONS)].join(''),
    ],
    [
      'velocities.csv',
      () =>
        [
          ...velocitiesCsv(
            tableTracks(tracks, measures.tracks, measures.details.segments),
            [1, 4],
            CONDITIONS,
          ),
        ].join(''),
    ],
    ['velocity-pdf.csv', () => [...velocityPdfCsv(measures.pdfs)].join('')],
    ['reconnections.csv', () => [...reconnectionsCsv(measures.candidates)].join('')],
    ['estimates.json', () => estimatesJson(measures.estimates)],
  ])('%s has the bytes that the kernels’ own results give, as a download', async (name, expected) => {
    for (const query of ['', '?corrections=none']) {
      const response = await call('GET', `${path}/${name}${query}`, { token });
      expect(response.headers.get('content-disposition')).toBe(
        `attachment; filename="${name}"; filename*=UTF-8''${name}`,
      );
      expect((await response.text()) === expected()).toBe(true);
    }
  });

  it('an unknown word for corrections is refused', async () => {
    expect((await get('/tracks.csv?corrections=some')).status).toBe(400);
  });
});

describe('windows of tracks', () => {
  /** Slow and obvious: every point of every track, kept or not. */
  function inWindow(from: number, to: number) {
    const points: string[] = [];
    for (let track = 0; track < tracks.count; track++) {
      for (let i = tracks.start[track]; i < tracks.start[track + 1]; i++) {
        const frame = tracks.frame[i];
        if (frame < from || frame > to) continue;
        points.push(`${track} ${frame} ${tracks.xPx[i].toFixed(1)} ${tracks.yPx[i].toFixed(1)}`);
      }
    }
    return points;
  }

  it.each([
    [0, 0],
    [10, 20],
    [60, 70],
    [79, 79],
    [0, 79],
    [500, 600],
  ])('frames %d to %d hold exactly the points that were stored', async (from, to) => {
    const { status, body } = await get<views.TrackWindowView>(`/tracks?from=${from}&to=${to}`);
    expect(status).toBe(200);
    const window = views.trackWindowSchema.parse(body);
    const points = window.tracks.flatMap((track, i) =>
      Array.from({ length: window.start[i + 1] - window.start[i] }, (_, k) => {
        const at = window.start[i] + k;
        return [track, window.frame[at], window.x[at], window.y[at]];
      }),
    );
    const expected = inWindow(from, to).map((line) => line.split(' ').map(Number));
    expect(points.map(([track, frame]) => [track, frame])).toEqual(
      expected.map(([track, frame]) => [track, frame]),
    );
    // Hundredths of a pixel are sent; the oracle rounds to tenths.
    points.forEach(([, , x, y], i) => {
      expect(Math.abs(x - expected[i][2]) <= 0.06 && Math.abs(y - expected[i][3]) <= 0.06).toBe(true);
    });
  });

  it.each(['', '?from=0', '?from=5&to=4', '?from=0&to=1000', '?from=-1&to=1', '?from=a&to=b'])(
    'the window %j is refused',
    async (query) => expect((await get(`/tracks${query}`)).status).toBe(400),
  );
});

describe('lists of results', () => {
  it.each(['track', '-points', '-meanSpeed_m_s', 'pTrapped', '-brightness', 'firstFrame'])(
    'tracks by %s: all of them, each once, over pages',
    async (sort) => {
      const seen: TrackRow[] = [];
      let cursor: string | null = null;
      do {
        const query: string = `/track-list?sort=${sort}&limit=40${cursor ? `&cursor=${cursor}` : ''}`;
        const { body }: { body: ListView<TrackRow> } = await get<ListView<TrackRow>>(query);
        seen.push(...body.items);
        cursor = body.nextCursor;
      } while (cursor !== null);
      expect(new Set(seen.map(({ track }) => track)).size).toBe(tracks.count);
      expect(seen).toHaveLength(tracks.count);
      const field = sort.replace('-', '') as keyof TrackRow;
      const values = seen.map((row) => Number(row[field] ?? -Infinity));
      const sign = sort.startsWith('-') ? -1 : 1;
      // Shown values are rounded: neighbours may differ by a unit of the last digit shown.
      const inOrder = values.every(
        (value, i) =>
          i === 0 || sign * (value - values[i - 1]) >= -1e-4 * Math.abs(value) || value === values[i - 1],
      );
      expect(inOrder).toBe(true);
    },
  );
  type TrackRow = views.TrackRowView;

  it('tracks of one population are those that were measured so', async () => {
    const { body } = await get<ListView<TrackRow>>('/track-list?population=trapped&limit=200&sort=track');
    const trapped = [...measures.tracks.population.keys()].filter((i) => measures.tracks.population[i] === 0);
    expect(body.items.map(({ track }) => track)).toEqual(trapped.slice(0, 200));
  });

  it('measures and candidates fit what the API says of them', async () => {
    const { body } = await get('/measures');
    const view = views.measuresViewSchema.parse(body);
    expect(view.spotsPerFrame).toEqual([3, 4]);
    expect(view.pdfs).toHaveLength(measures.pdfs.length);
    const { displacements, autocorrelations, tails } = measures.motion;
    expect(view.motion?.displacements.map(({ value_m2 }) => value_m2)).toEqual(
      displacements.map(({ valueM2 }) => valueM2),
    );
    expect(view.motion?.autocorrelations).toHaveLength(autocorrelations.length);
    expect(view.motion?.tails.map(({ verdict }) => verdict)).toEqual(tails.map(({ verdict }) => verdict));
    expect(tails.length).toBeGreaterThan(0);
    const { body: list } = await get<ListView<unknown>>('/candidates?limit=200');
    const candidates = list.items.map((item) => views.candidateViewSchema.parse(item));
    expect(candidates.map(({ event, trackA }) => [event, trackA])).toEqual(
      measures.candidates.map(({ trackA }, event) => [event, trackA]),
    );
  });
});

describe('the stream of progress', () => {
  it('sends the body of the GET as an event and ends after a final state', async () => {
    const response = await call('GET', `${path}/progress`, { token });
    expect(response.headers.get('content-type')).toBe('text/event-stream');
    const text = await response.text();
    const { body } = await get('');
    expect(text).toBe(`event: progress\ndata: ${JSON.stringify(body)}\n\n`);
  });

  it('sends another event at each change until the end', async () => {
    const running = await makeAnalysis(lab, { state: 'waiting', stage: 'measure-image' });
    const response = await call('GET', `/api/v1/analyses/${running.id}/progress`, { token });
    const reader = response.body!.getReader();
    const next = async () => new TextDecoder().decode((await reader.read()).value);
    expect(await next()).toContain('"state":"waiting"');
    await running.update({ state: 'running', progress: 0.5 });
    expect(await next()).toContain('"progress":0.5');
    await running.update({ state: 'failed', errorCode: 'X', errorDetail: 'Why.' });
    expect(await next()).toContain('"detail":"Why."');
    expect((await reader.read()).done).toBe(true);
  });

  it('stops looking when the reader leaves', async () => {
    const running = await makeAnalysis(lab, { state: 'running' });
    const leave = new AbortController();
    const options = { token, signal: leave.signal };
    const response = await call('GET', `/api/v1/analyses/${running.id}/progress`, options);
    const reader = response.body!.getReader();
    await reader.read();
    leave.abort();
    expect((await reader.read()).done).toBe(true);
  });
});
