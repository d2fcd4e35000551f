import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { analysisViewSchema } from '@/lib/views/analysis-view';
import type { ProblemView } from '@/lib/views/common';
import { runViewSchema, type RunView } from '@/lib/views/run-view';
import { models } from '@/models';
import { callJson, webSettings } from '../../helpers/call-route';
import { expectWithin } from '../../helpers/expect-within';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeAnalysis, makeRecording, makeRun, type LabRows } from '../../helpers/lab-rows';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

let database: FreshDatabase;
let lab: TestLab;
let token: string;
let rows: LabRows;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
  token = lab.people.experimentalist.token;
  const { body } = await callJson<{ id: string }>('POST', '/api/v1/campaigns', {
    token,
    json: { name: 'C' },
  });
  rows = { labId: lab.labId, userId: lab.people.experimentalist.userId, campaignId: body.id };
});
afterAll(async ({}, suite) => {
  await closeDoorbell();
  await database.dropIfGreen({}, suite);
});

const make = (json: unknown) =>
  callJson<RunView & ProblemView>('POST', `/api/v1/campaigns/${rows.campaignId}/runs`, { token, json });

describe('runs', () => {
  it('come back with conditions flat beside the name, as sent, and derived values', async () => {
    const conditions = {
      pixelSize_m: 5e-6,
      frameInterval_s: 5e-3,
      temperature_K: 1.85,
      heatFlux_W_m2: 300,
      drive: 'counterflow',
      flowDirection: [1, 0],
      tracer: { species: 'solid deuterium', diameter_m: 4e-6, density_kg_m3: 202 },
      channel: { shape: 'rectangular', width_m: 0.01, depth_m: 0.01, length_m: 0.2 },
    };
    const { status, body, headers } = await make({ name: 'Run', tags: ['a'], ...conditions });
    expect(status).toBe(201);
    expect(headers.get('location')).toBe(`/api/v1/runs/${body.id}`);
    expect(body).toMatchObject(conditions);
    expect(runViewSchema.parse(body).gravityDirection).toEqual([0, 1]);
    // v_n = q / (rho s T), with rho = 145.407 kg/m^3 and s = 627.1 J/(kg K) at 1.85 K (Donnelly & Barenghi 1998).
    expectWithin(body.derived.vn_m_s!, 300 / (145.407 * 627.1 * 1.85), { rel: 1e-3 });
  });

  // B32: what was typed stands in the sentence, in the laboratory's unit.
  it.each([-3e-6, 0, 1])('a pixel size of %s m is refused by name', async (pixelSize_m) => {
    const { status, body } = await make({ name: 'Run', pixelSize_m });
    expect([status, body.code, body.errors[0].path]).toEqual([422, 'FIELD_RANGE', 'pixelSize_m']);
    expect(body.detail).toBe(
      `Pixel size must be a number above 0 and at most 1000 um (you typed '${pixelSize_m * 1e6}').`,
    );
  });
  it.each(['1,5', null, '', true])('a frame interval of %j is no number', async (frameInterval_s) => {
    const { status } = await make({ name: 'Run', frameInterval_s });
    expect(status).toBe(frameInterval_s === null ? 201 : 422);
  });

  // B33: a slip of the unit is asked about, and accepted once confirmed.
  it('an unlikely temperature is refused until it is confirmed', async () => {
    const { status, body } = await make({ name: 'Run', temperature_K: 1.9e-3 });
    expect([status, body.code]).toEqual([422, 'SUSPICIOUS']);
    expect(body.detail).toBe(
      'Temperature 0.0019 K is outside 0.8-2.1768 K for two-fluid He II. Did you mean 1.9 K?',
    );
    const confirmed = await make({ name: 'Run', temperature_K: 1.9e-3, confirm: ['temperature_K'] });
    expect([confirmed.status, confirmed.body.derived.vn_m_s]).toEqual([201, null]);
  });

  it('a field that is left out of a change stays, and null empties it', async () => {
    const { body: made } = await make({ name: 'Run', pixelSize_m: 5e-6, frameInterval_s: 5e-3, notes: 'n' });
    const path = `/api/v1/runs/${made.id}`;
    const { body } = await callJson<RunView>('PATCH', path, {
      token,
      json: { frameInterval_s: null, tracer: { species: 'hydrogen' } },
      headers: { 'if-match': '"1"' },
    });
    expect(body).toMatchObject({ name: 'Run', pixelSize_m: 5e-6, frameInterval_s: null, notes: 'n' });
    expect(body.tracer).toEqual({ species: 'hydrogen' });
  });

  it('an administrator sees that a run exists, and nothing of what was measured', async () => {
    const run = await makeRun(rows, { temperatureK: 1.8, notes: 'secret' });
    const { body } = await callJson<RunView>('GET', `/api/v1/runs/${run.id}`, {
      token: lab.people.lab_administrator.token,
    });
    expect(body).toMatchObject({ id: run.id, name: 'Test run', notes: null, headline: null });
    expect(body.temperature_K).toBeUndefined();
  });
});

describe('starting an analysis', () => {
  const start = (recordingId: string, json: unknown) =>
    callJson<AnalysisView & ProblemView>('POST', `/api/v1/recordings/${recordingId}/analyses`, {
      token,
      json,
    });

  it('answers 201 with the analysis, waiting, and its first job', async () => {
    const recording = await makeRecording(rows);
    const { status, body } = await start(recording.id, {
      recipe: { mayVanishFrames: 3, lagsFrames: [1, 2] },
    });
    expect(status).toBe(201);
    expect(analysisViewSchema.parse(body)).toMatchObject({
      state: 'waiting',
      recordingId: recording.id,
      recipe: { mayVanishFrames: 3, lagsFrames: [1, 2] },
      chunks: { done: 0 },
    });
    expect(await models().JobRun.count({ where: { subjectId: body.id, state: 'waiting' } })).toBe(1);
  });

  it('without pixel size or frame interval says what is missing', async () => {
    const run = await makeRun(rows, { frameIntervalS: null });
    const recording = await makeRecording(rows, { runId: run.id });
    const { status, body } = await start(recording.id, {});
    expect([status, body.code]).toEqual([422, 'CONDITIONS_MISSING']);
    expect(body.errors.map(({ path }) => path)).toEqual(['frameInterval_s']);
  });

  it('of a recording that is not ready answers 409', async () => {
    const recording = await makeRecording(rows, { state: 'checking' });
    const { status, body } = await start(recording.id, {});
    expect([status, body.code]).toEqual([409, 'STATE']);
  });

  // B44: names field, value and bound. The recording has 40 frames of 64 x 64.
  it.each([
    [{ longestStepPx: 900 }, 'recipe.longestStepPx', /900.*|at most 64/],
    [{ shortestTrackFrames: 41 }, 'recipe.shortestTrackFrames', /at most 40/],
    [{ lagsFrames: [50] }, 'recipe.lagsFrames', /at most 39/],
    [{ mayVanishFrames: 99 }, 'recipe.mayVanishFrames', /from 0 to 10/],
  ])('with the impossible recipe %j is refused', async (recipe, path, bound) => {
    const recording = await makeRecording(rows);
    const { status, body } = await start(recording.id, { recipe });
    expect([status, body.code, body.errors[0].path]).toEqual([422, 'PARAM_RANGE', path]);
    expect(body.detail).toMatch(bound);
  });

  it('with a saved recipe takes its fields and says its name', async () => {
    const recording = await makeRecording(rows);
    const recipe = { name: 'Slow', fields: { longestStepPx: 4 } };
    const saved = await callJson<{ id: string }>('POST', '/api/v1/recipes', { token, json: recipe });
    const { body } = await start(recording.id, { recipeId: saved.body.id });
    expect(body).toMatchObject({ recipe: { longestStepPx: 4 }, recipeName: 'Slow 1' });
  });

  it('results of an analysis that is not done answer 404 NOT_COMPUTED', async () => {
    const analysis = await makeAnalysis(rows, { state: 'running', stage: 'detect-spots' });
    for (const name of [
      'tracks.csv',
      'velocity-pdf.csv',
      'estimates.json',
      'measures',
      'track-list',
      'candidates',
    ]) {
      const { status, body } = await callJson('GET', `/api/v1/analyses/${analysis.id}/${name}`, { token });
      expect([name, status, body.code]).toEqual([name, 404, 'NOT_COMPUTED']);
    }
  });

  it('stopping twice is harmless, stopping what is done answers 409', async () => {
    const analysis = await makeAnalysis(rows, { createdBy: rows.userId });
    const path = `/api/v1/analyses/${analysis.id}/stop`;
    expect((await callJson('POST', path, { token })).body.state).toBe('stopped');
    expect((await callJson('POST', path, { token })).status).toBe(200);
    const done = await makeAnalysis(rows, { state: 'done', createdBy: rows.userId });
    expect((await callJson('POST', `/api/v1/analyses/${done.id}/stop`, { token })).status).toBe(409);
  });
});
