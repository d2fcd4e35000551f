import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { newId } from '@/lib/ids';
import { compareViewSchema } from '@/lib/views/compare-view';
import { models } from '@/models';
import { getSequelize } from '@/models/database';
import { saveMeasures } from '@/models/queries/analysis-outcome';
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

/** A measure of nothing but a line density. */
const measuresOf = (value: number | null): FlowMeasures =>
  ({
    populations: { trappedFraction: { value: 0.4, low: 0.35, high: 0.45, level: 0.95 } },
    pairs: {},
    pdfs: [],
    motion: { displacements: [], autocorrelations: [], tails: [] },
    details: null,
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

  it('is closed to annotators', async () => {
    const response = await call('GET', '/api/v1/compare', { token: own.people.annotator.token });
    expect(response.status).toBe(403);
  });
});
