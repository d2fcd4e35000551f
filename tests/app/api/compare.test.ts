import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { newId } from '@/lib/ids';
import { compareViewSchema, coursesSchema, pooledPdfSchema, savedSelectionSchema } from '@/lib/views/compare-view'; // prettier-ignore
import { problemSchema } from '@/lib/views/common';
import { searchViewSchema } from '@/lib/views/search-view';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { saveMeasures } from '@/models/queries/analysis-outcome';
import { execute, selectRows } from '@/models/queries/select';
import type { FlowMeasures } from '@/tracking/flow-measures';
import { call, webSettings } from '../../helpers/call-route';
import { expectWithin } from '../../helpers/expect-within';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeAnalysis, makeRecording, makeRun, type LabRows } from '../../helpers/lab-rows';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

let database: FreshDatabase;
let own: TestLab;
let token: string;
let ids: string[];

/** A clean growth of one form of the equation: dL/dt = a L^(3/2) - b L^2, followed by Euler steps. */
function course() {
  const timeS = Array.from({ length: 40 }, (_, i) => 0.1 * (i + 1));
  let y = 0.05;
  const value = timeS.map(() => {
    for (let k = 0; k < 400; k++) y += 4 * (0.1 / 400) * (y ** 1.5 - y * y);
    return 1e8 * y;
  });
  const series = { value, low: value.map((v) => 0.98 * v), high: value.map((v) => 1.02 * v) };
  return {
    timeS,
    trappedPerAreaM2: series,
    freePerAreaM2: series,
    densities: [{ method: 'beads-per-length', note: '', ...series }],
    transient: { kind: 'growth', pConstant: 0, laws: [], note: 'It grows.', forms: [{ form: 'V L^3/2', deltaBic: 0, deltaAicc: 0, ratePerS: 1, rateLnError: 0.1 }] }, // prettier-ignore
  };
}

/** A measure of little but a line density. */
const measuresOf = (value: number | null): FlowMeasures =>
  ({
    populations: { trappedFraction: { value: 0.4, low: 0.35, high: 0.45, level: 0.95 } },
    pairs: {},
    pdfs: [
      { population: 'all', component: 'across', lagFrames: 1, lagS: 0.005, edgesMS: [-0.002, 0, 0.002], count: [1, 1], density: [250, 250], densityLow: [240, 240], densityHigh: [260, 260], samples: value === 1e7 ? 1e6 : 20, tracks: 9, meanMS: 0, varianceM2S2: 1e-6, noiseVarianceM2S2: 0, excessKurtosis: 0 }, // prettier-ignore
    ],
    motion: {
      displacements: [],
      autocorrelations: [],
      tails: [
        { population: 'trapped', component: 'speed', lagFrames: 4, lagS: 0.02, exponent: 3.4, exponentLow: 3, exponentHigh: 4 },
        { population: 'trapped', component: 'speed', lagFrames: 1, lagS: 0.005, exponent: 3.1, exponentLow: 2.8, exponentHigh: 3.5 },
        { population: 'free', component: 'speed', lagFrames: 1, lagS: 0.005, exponent: 9, exponentLow: 8, exponentHigh: 10 },
      ], // prettier-ignore
    },
    details: { overTime: course(), profiles: null },
    candidates: [],
    estimates: [
      { quantity: 'line_density', unit: 'm^-2', method: 'combined', value, low: value && value / 1.3, high: value && value * 1.3, level: 0.95, inputs: {}, note: '' }, // prettier-ignore
    ],
  }) as unknown as FlowMeasures;

async function analysedRun(lab: LabRows, heatFluxWM2: number, value: number | null) {
  const run = await makeRun(lab, {
    name: `q ${heatFluxWM2}`,
    temperatureK: 1.85,
    drive: 'counterflow',
    heatFluxWM2,
  });
  const recording = await makeRecording(lab, { runId: run.id });
  const summary = { spots: 1, tracks: 7, trackPoints: 1, bridgedPoints: 0, trapped: 3, free: 3, undecided: 1, candidates: 2, acceptedCandidates: 2 }; // prettier-ignore
  const analysis = await makeAnalysis(lab, {
    recordingId: recording.id,
    conditions: { pixelSize_m: 5e-6, frameInterval_s: 5e-3, sheetThickness_m: 1e-4 },
    frames: 40,
    state: 'done',
    stage: 'done',
    summary,
  });
  await getSequelize().transaction((transaction) =>
    saveMeasures(lab.labId, analysis.id, 0, measuresOf(value), transaction),
  );
  return analysis.id;
}

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  own = await makeTestLab(database.url, 'Own laboratory');
  const other = await makeTestLab(database.url, 'Other laboratory');
  token = own.people.analyst.token;
  const campaigns = [newId(), newId()];
  ids = campaigns;
  const labs: LabRows[] = [];
  for (const [index, id] of campaigns.entries()) {
    const userId = own.people.experimentalist.userId;
    await models().Campaign.create({ id, labId: own.labId, name: `Cooldown ${index}`, createdBy: userId });
    labs.push({ labId: own.labId, userId, campaignId: id });
  }
  for (const [q, value] of [[500, 1e7], [1000, 6e7], [1500, 1.5e8], [2000, null]] as const) await analysedRun(labs[0], q, value); // prettier-ignore
  await makeRun(labs[1], { name: 'bare' });
  const theirs = { labId: other.labId, userId: other.people.experimentalist.userId, campaignId: newId() };
  await models().Campaign.create({
    id: theirs.campaignId,
    labId: other.labId,
    name: 'Theirs',
    createdBy: theirs.userId,
  });
  await analysedRun(theirs, 700, 3e7);
});
afterAll(async ({}, suite) => {
  await closeDoorbell();
  await database.dropIfGreen({}, suite);
});

const get = async (query = '') => {
  const response = await call('GET', `/api/v1/compare${query}`, { token });
  return { status: response.status, body: await response.json() };
};

describe('the comparison of runs', () => {
  it('has every run of the laboratory and no other, with velocities, densities and what is left out', async () => {
    const { status, body } = await get();
    expect(status).toBe(200);
    const view = compareViewSchema.parse(body);
    expect(view.campaigns.map(({ name, runs }) => [name, runs])).toEqual([['Cooldown 0', 4], ['Cooldown 1', 1]]); // prettier-ignore
    expect(view.runs.map(({ runName }) => runName)).toEqual(['q 500', 'q 1000', 'q 1500', 'q 2000', 'bare']);
    // v_ns = q / (rho_s S T) at 1.85 K: 9.314 mm/s for 100 mW/cm^2 (two-fluid model, Donnelly & Barenghi 1998).
    expectWithin(view.runs[1].vns_m_s?.value ?? 0, 9.314e-3, { rel: 2e-3 });
    expect(view.runs[1].lineDensity_m2).toMatchObject({ value: 6e7 });
    expect(view.runs[1]).toMatchObject({
      tracks: 7,
      acceptedCandidates: 2,
      leftOut: null,
      trappedShare: { value: 0.4 },
    });
    expect(view.runs[3].leftOut).toMatch(/no line density/);
    expect(view.runs[4].leftOut).toMatch(/No analysis/);
    expect(view.fits[0].runs).toBe(3);
    expect(view.fits[0].gamma_s_m2?.value).toBeGreaterThan(0);
    expect(view.fits[1].gamma_s_m2).toBeNull();
  });

  it('keeps to the campaigns, temperatures and method asked for', async () => {
    const one = compareViewSchema.parse((await get(`?campaigns=${ids[1]}`)).body);
    expect(one.runs.map(({ runName }) => runName)).toEqual(['bare']);
    const cold = compareViewSchema.parse((await get('?temperatureTo_K=1.8')).body);
    expect(cold.runs).toEqual([]);
    const other = compareViewSchema.parse((await get('?method=crossings')).body);
    expect(other.runs.every(({ lineDensity_m2 }) => lineDensity_m2 === null)).toBe(true);
    expect((await get('?method=guess')).status).toBe(400);
  });

  it('chooses by ranges of heat flux and counterflow velocity, drive, tags and sign-off', async () => {
    const names = async (query: string) => compareViewSchema.parse((await get(query)).body).runs.map(({ runName }) => runName); // prettier-ignore
    expect(await names('?heatFluxFrom_W_m2=900&heatFluxTo_W_m2=1600')).toEqual(['q 1000', 'q 1500']);
    // 9.314 mm/s at 1000 W/m^2 and so in proportion.
    expect(await names('?vnsFrom_m_s=0.009&vnsTo_m_s=0.0095')).toEqual(['q 1000']);
    expect(await names('?drives=counterflow&heatFluxTo_W_m2=600')).toEqual(['q 500']);
    expect(await names('?drives=towed-grid')).toEqual([]);
    await execute(`UPDATE runs SET tags = '{clean}' WHERE lab_id = $1 AND name = 'q 1500'`, [own.labId]);
    expect(await names('?tags=clean,other')).toEqual(['q 1500']);
    expect(compareViewSchema.parse((await get()).body).tags).toEqual(['clean']);
    expect(await names('?signedOff=yes')).toEqual([]);
    await execute(`UPDATE analyses SET signed_off_at = now(), signed_off_by = $2, content_hash = 'ab' WHERE lab_id = $1 AND recording_id IN (SELECT g.id FROM recordings g JOIN runs r ON r.id = g.run_id WHERE r.name = 'q 500')`, [own.labId, own.people.principal_investigator.userId]); // prettier-ignore
    const signed = compareViewSchema.parse((await get('?signedOff=yes')).body).runs;
    expect(signed.map(({ runName }) => runName)).toEqual(['q 500']);
    expect(signed[0].signedOff?.by).toBeTruthy();
    expect(await names('?signedOff=no')).toEqual(['q 1000', 'q 1500', 'q 2000']);
    expect((await get('?vnsFrom_m_s=0.02&vnsTo_m_s=0.01')).body.detail).toMatch(/must not be above/);
  });

  it('tells the tail of the shortest lag, events per volume and time, and densities by method', async () => {
    const [run] = compareViewSchema.parse((await get()).body).runs;
    expect(run.tailExponent).toEqual({ value: 3.1, low: 2.8, high: 3.5 });
    expect(run.lineDensities_m2.map(({ method }) => method)).toEqual(['combined']);
    // 64 x 64 px of 5 um in 0.1 mm for 40 frames of 5 ms (helpers/lab-rows): 2.048e-12 m^3 s; no event was seen, and
    // the upper limit of a Poisson mean is then 3.689 (Garwood 1936).
    expect(run.events).toMatchObject({ confirmed: 0, judged: 0, candidates: 0 });
    expectWithin(run.events!.perVolumeTime_m3_s!.high!, 3.6889 / 2.048e-12, { rel: 1e-3 });
  });

  it('leaves a run out only with a reason, which shows with who gave it, and takes it in again', async () => {
    const [run] = compareViewSchema.parse((await get()).body).runs;
    const path = `/api/v1/runs/${run.runId}/exclusion`;
    const bare = await call('PUT', path, { token, json: { reason: '  ' } });
    expect(bare.status).toBe(422);
    expect((await call('PUT', path, { token, json: { reason: 'The heater was off.' } })).status).toBe(204);
    const view = compareViewSchema.parse((await get()).body);
    expect(view.runs[0].exclusion?.reason).toBe('The heater was off.');
    expect(view.runs[0].leftOut).toMatch(/^Left out by .+: The heater was off\.$/);
    // Two runs are too few for a fit.
    expect(view.fits[0].gamma_s_m2).toBeNull();
    expect((await call('DELETE', path, { token })).status).toBe(204);
    expect((await call('DELETE', path, { token })).status).toBe(409);
    expect(compareViewSchema.parse((await get()).body).runs[0].leftOut).toBeNull();
    const kept = await selectRows<{ action: string }>(
      `SELECT action FROM audit_entries WHERE subject_id = $1 AND action LIKE 'run.%in' OR subject_id = $1 AND action = 'run.left-out' ORDER BY created_at`,
      [run.runId],
    );
    expect(kept.map(({ action }) => action)).toEqual(['run.left-out', 'run.taken-in']);
    const denied = await call('PUT', path, { token: own.people.annotator.token, json: { reason: 'Mine.' } });
    expect(denied.status).toBe(403);
  });

  it('pools distributions with each run counted once, in the units asked for', async () => {
    const pooled = async (query: string) => pooledPdfSchema.parse(await (await call('GET', `/api/v1/compare/velocity-pdf?${query}`, { token })).json()); // prettier-ignore
    const plain = await pooled(`campaigns=${ids[0]}`);
    expect(plain.runs).toHaveLength(4);
    expect(plain.density).toEqual([250, 250]);
    expect(plain.between).toEqual([0, 0]);
    const sigma = await pooled(`campaigns=${ids[0]}&scale=deviation`);
    // s = 1 mm/s: edges at -2, 0 and 2 of them, density 250 s/m times 1e-3 m/s.
    expect(sigma.edges.map((edge) => Math.round(1e6 * edge) / 1e6)).toEqual([-2, 0, 2]);
    expectWithin(sigma.density[0], 0.25, { rel: 1e-9 });
    const scaled = await pooled(`campaigns=${ids[0]}&scale=kappa-over-spacing`);
    expect(scaled.runs).toEqual([]);
    expect(scaled.leftOut.map(({ reason }) => reason)).toEqual(Array(4).fill('It has no combined line spacing.')); // prettier-ignore
    expect((await pooled(`campaigns=${ids[1]}`)).leftOut[0].reason).toMatch(/No analysis/);
  });

  it('tells courses with the three forms by their formulas, and the one that made them', async () => {
    const answer = await call('GET', `/api/v1/compare/courses?campaigns=${ids[0]}`, { token });
    const { runs, without } = coursesSchema.parse(await answer.json());
    expect([runs.length, without]).toEqual([4, 0]);
    expect(runs[0].overTime.forms.map(({ form }) => form)).toEqual(['V L^3/2', 'V^2 L', 'V^3 L^1/2']);
    expect(runs[0].overTime.chosen).toBe('V L^3/2');
    // The fitted curve passes through the course that made it.
    const [form] = runs[0].overTime.forms;
    expectWithin(form.value.at(-1)!, course().trappedPerAreaM2.value.at(-1)!, { rel: 0.01 });
  });

  it('is closed to annotators', async () => {
    const response = await call('GET', '/api/v1/compare', { token: own.people.annotator.token });
    expect(response.status).toBe(403);
  });
});

describe('saved selections', () => {
  const post = (json: unknown, who = token) => call('POST', '/api/v1/selections', { token: who, json });

  it('are kept by name for the laboratory, found in its list, changed by their maker, and on record', async () => {
    const made = await post({ name: 'Warm runs', filters: { temperatureFrom_K: '1.8', signedOff: 'yes' } });
    expect(made.status).toBe(201);
    const saved = savedSelectionSchema.parse(await made.json());
    expect(saved.filters).toEqual({ temperatureFrom_K: '1.8', signedOff: 'yes' });
    expect((await post({ name: 'WARM runs', filters: {} })).status).toBe(422);
    const list = await (await call('GET', '/api/v1/selections?q=warm', { token })).json();
    expect(list.items).toHaveLength(1);
    const path = `/api/v1/selections/${saved.id}`;
    const experimentalist = own.people.experimentalist.token;
    expect((await call('PATCH', path, { token: experimentalist, json: { name: 'Mine' }, headers: { 'if-match': '"1"' } })).status).toBe(403); // prettier-ignore
    const renamed = await call('PATCH', path, { token, json: { name: 'Warmer' }, headers: { 'if-match': '"1"' } }); // prettier-ignore
    expect(await renamed.json()).toMatchObject({ name: 'Warmer', revision: 2, filters: saved.filters });
    expect((await call('PATCH', path, { token, json: { name: 'Late' }, headers: { 'if-match': '"1"' } })).status).toBe(412); // prettier-ignore
    expect((await call('DELETE', path, { token: own.people.principal_investigator.token })).status).toBe(204);
    expect((await call('GET', path, { token })).status).toBe(404);
    const acts = await selectRows<{ action: string }>(
      'SELECT action FROM audit_entries WHERE subject_id = $1 ORDER BY created_at',
      [saved.id],
    );
    expect(acts.map(({ action }) => action)).toEqual(['selection.saved', 'selection.changed', 'selection.removed']); // prettier-ignore
  });

  it.each([
    [{ name: 'x', filters: { colour: 'red' } }],
    [{ name: 'x', filters: { temperatureFrom_K: 'warm' } }],
    [{ name: 'x', filters: { vnsFrom_m_s: '2', vnsTo_m_s: '1' } }],
    [{ name: '', filters: {} }],
  ])('%j is refused with a sentence', async (json) => {
    const answer = await post(json);
    expect(answer.status).toBe(422);
    expect((await answer.json()).errors[0].message).toMatch(/\.$/);
  });
});

describe('whoever asks for too much', () => {
  it('gets 429 with Retry-After and a problem document that names the bound; reading goes on', async () => {
    process.env.BEADLINE_LIMIT_CHANGES_PER_MINUTE = '3';
    const { token: own4 } = own.people.principal_investigator;
    const ask = () =>
      call('POST', '/api/v1/selections', { token: own4, json: { name: newId(), filters: {} } });
    let answer = await ask();
    for (let i = 0; i < 8 && answer.status !== 429; i++) answer = await ask();
    delete process.env.BEADLINE_LIMIT_CHANGES_PER_MINUTE;
    expect(answer.status).toBe(429);
    expect(answer.headers.get('content-type')).toBe('application/problem+json');
    const waitS = Number(answer.headers.get('retry-after'));
    expect(waitS).toBeGreaterThan(0);
    expect(waitS).toBeLessThanOrEqual(60);
    const problem = problemSchema.parse(await answer.json());
    expect(problem.code).toBe('TOO_MANY');
    expect(problem.detail).toMatch(/^More than 3 changes a minute\. Wait \d+ s\.$/);
    expect((await call('GET', '/api/v1/selections', { token: own4 })).status).toBe(200);
  });
});

describe('search', () => {
  const find = async (q: string, who = token) => searchViewSchema.parse(await (await call('GET', `/api/v1/search?q=${encodeURIComponent(q)}`, { token: who })).json()); // prettier-ignore

  it('finds campaigns, runs, recordings and people of the laboratory by words in any order, and no others', async () => {
    const { campaigns, runs } = await find('cooldown');
    expect(campaigns.map(({ name }) => name).sort()).toEqual(['Cooldown 0', 'Cooldown 1']);
    expect(runs.length).toBe(5);
    expect((await find('1000 q')).runs.map(({ name }) => name)).toEqual(['q 1000']);
    expect((await find('stack 1500')).recordings.map(({ runName }) => runName)).toEqual(['q 1500']);
    expect((await find('Theirs')).campaigns).toEqual([]);
    expect((await find('100%')).runs).toEqual([]);
    const [first] = await selectRows<{ name: string }>('SELECT name FROM users WHERE id = $1', [own.people.annotator.userId]); // prettier-ignore
    expect((await find(first.name)).people.map(({ name }) => name)).toContain(first.name);
  });

  it('asks for words', async () => {
    const answer = await call('GET', '/api/v1/search?q=%20', { token });
    expect(answer.status).toBe(400);
  });
});
