import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { rehearsalResultSchema, type RehearsalResult, type RehearsalView } from '@/lib/views/rehearsal-view';
import { models } from '@/models';
import type { Recording } from '@/models/recording';
import { compareRuns } from '@/models/queries/compare';
import { labOverview } from '@/models/queries/overview';
import { truthOfCandidates } from '@/models/queries/rehearsal-truth';
import { labStorage } from '@/models/queries/storage';
import { closeSessionLocks } from '@/models/session-locks';
import { callJson, webSettings } from '../../helpers/call-route';
import { arriveRecording, checked } from '../../helpers/demo-recording';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import type { LabRows } from '../../helpers/lab-rows';
import { REHEARSAL_PLAN } from '../../helpers/rehearsal-plan';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';
import { until } from '../../helpers/until';
import { startWorkerProcess, type WorkerProcessHandle } from '../../helpers/worker-process';

let database: FreshDatabase;
let lab: TestLab;
let worker: WorkerProcessHandle;
let first: RehearsalResult;
let planted: RehearsalResult;
let taken: Recording;

const { conditions, scene, camera, seed } = REHEARSAL_PLAN;
const ORDER = { name: 'Gentle heat', conditions, scene, camera, seed };

const post = (json: object, role: keyof TestLab['people'] = 'experimentalist') =>
  callJson<RehearsalView>('POST', '/api/v1/rehearsals', { token: lab.people[role].token, json });
const get = async (id: string) =>
  (await callJson<RehearsalResult>('GET', `/api/v1/rehearsals/${id}`, { token: lab.people.analyst.token })).body; // prettier-ignore
const ended = (id: string) =>
  until(() => get(id), ({ state }) => state !== 'waiting' && state !== 'running', { withinMs: 150_000, everyMs: 200 }); // prettier-ignore

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
  worker = startWorkerProcess();
  const campaign = await models().Campaign.create({ id: lab.labId, labId: lab.labId, name: 'Cooldown' });
  const rows: LabRows = { labId: lab.labId, userId: lab.people.experimentalist.userId, campaignId: campaign.id }; // prettier-ignore
  const [arriving, simulated] = await Promise.all([arriveRecording(rows), post(ORDER)]);
  taken = await checked(arriving);
  const inFrames = await post({
    name: 'In real frames',
    kind: 'planted',
    recordingId: taken.id,
    scene: { seeding_m2: 8e6, brightness_e: 700, meetings: 2 },
  });
  expect([simulated.status, inFrames.status]).toEqual([201, 201]);
  first = await ended(simulated.body.id);
  planted = await ended(inFrames.body.id);
}, 240_000);
afterAll(async ({}, suite) => {
  await worker?.end();
  await closeDoorbell();
  await closeSessionLocks();
  await database.dropIfGreen({}, suite);
});

describe('a simulated rehearsal', () => {
  it('goes the ordinary way and ends with a comparison in the published shape', async () => {
    expect(first).toMatchObject({ state: 'done', stage: 'done', progress: 1, error: null });
    expect(rehearsalResultSchema.parse(first)).toEqual(first);
    const jobs = await models().JobRun.findAll({ where: { labId: lab.labId, state: 'done' } });
    const kinds = new Set(jobs.map(({ kind }) => kind));
    for (const kind of ['simulate-rehearsal', 'ingest-recording', 'measure-image', 'detect-spots', 'link-tracks', 'measure-flow', 'assess-rehearsal']) expect([...kinds]).toContain(kind); // prettier-ignore
  });

  it('recovers nearly all of what it was made of', () => {
    const { detection, tracks, populations, estimates, trueLineDensityM2 } = first.assessments[0].assessment;
    // Bounds that a correct program meets with room to spare; accuracy itself is stated by `npm run validate`.
    expect(detection.found.value).toBeGreaterThan(0.85);
    expect(detection.falsePerFrame).toBeLessThan(1);
    expect(detection.errorPx! / detection.boundPx!).toBeLessThan(1.3);
    expect(tracks.alpha).toBeGreaterThan(0.75);
    expect(populations.trapped.free + populations.free.trapped).toBeLessThan(15);
    expect(trueLineDensityM2).toBe(2e7);
    const used = estimates.filter(({ value }) => value !== null);
    for (const { value, ratio } of used) expect(ratio! * 2e7).toBeCloseTo(value!, -1);
  });

  it('is marked wherever its recording and analyses show, and mixed into nothing of the laboratory', async () => {
    const { token } = lab.people.principal_investigator;
    const recording = await callJson('GET', `/api/v1/recordings/${first.recordingId}`, { token });
    const mark = { id: first.id, name: 'Gentle heat', kind: 'simulated' };
    expect(recording.body.rehearsal).toEqual(mark);
    const analyses = await callJson<{ items: { rehearsal: unknown }[] }>('GET', '/api/v1/analyses', {
      token,
    });
    expect(analyses.body.items.map((item) => item.rehearsal)).toContainEqual(mark);
    const own = await callJson<{ items: unknown[] }>('GET', '/api/v1/analyses?rehearsals=no', { token });
    expect(own.body.items).toEqual([]);
    const campaigns = await callJson<{ items: { name: string }[] }>('GET', '/api/v1/campaigns', { token });
    expect(campaigns.body.items.map(({ name }) => name)).toEqual(['Cooldown']);
    const compared = await compareRuns(lab.labId, { method: 'combined' });
    expect(compared.runs.map(({ campaignName }) => campaignName)).toEqual(['Cooldown']);
    const overview = await labOverview(lab.labId, lab.people.analyst.userId);
    expect(overview.results).toEqual([]);
    expect(overview.counts.campaigns).toBe(1);
    const { recordings, rehearsals, bytes } = await labStorage(lab.labId);
    expect([recordings, rehearsals.recordings]).toEqual([3, 2]);
    expect(rehearsals.bytes).toBeLessThan(bytes);
  });

  it('gives the same bytes for the same plan', async () => {
    const again = await post({ ...ORDER, name: 'The same again' }, 'analyst');
    const second = await until(() => get(again.body.id), ({ recordingId }) => recordingId !== null, { withinMs: 60_000 }); // prettier-ignore
    const find = (id: string | null) => models().Recording.findByPk(id!);
    const remade = await until(() => find(second.recordingId), (row) => row?.state === 'ready', { withinMs: 60_000 }); // prettier-ignore
    expect(remade!.sha256).toBe((await find(first.recordingId))!.sha256);
    const stopped = await callJson('POST', `/api/v1/rehearsals/${again.body.id}/stop`, { token: lab.people.analyst.token }); // prettier-ignore
    // It may have ended by itself in the meantime.
    expect([200, 409]).toContain(stopped.status);
  });

  it('lets whoever asks the readers know which candidates are events', async () => {
    const analysisId = first.assessments[0].analysisId;
    const candidates = await models().Candidate.findAll({ where: { analysisId }, order: [['event', 'ASC']] });
    const truth = await truthOfCandidates(lab.labId, candidates.map(({ id }) => id)); // prettier-ignore
    expect(truth.size).toBe(candidates.length);
    const { events } = first.assessments[0].assessment;
    const named = events.events.flatMap(({ candidate }) => (candidate === null ? [] : [candidate]));
    expect(named.length).toBeGreaterThan(0);
    for (const { id, event } of candidates) expect(truth.get(id)).toBe(named.includes(event));
    expect(await truthOfCandidates(lab.people.analyst.userId, [...truth.keys()])).toEqual(new Map());
    expect(JSON.stringify(first)).not.toContain('"truth"');
  });
});

describe('planted particles', () => {
  it('are found again in the frames, and nothing is said of what nobody knows', () => {
    expect(planted).toMatchObject({ state: 'done', source: { recordingId: taken.id, name: 'scene.tif' } });
    const { detection, tracks, trueLineDensityM2, estimates } = planted.assessments[0].assessment;
    expect(detection.found.value).toBeGreaterThan(0.7);
    expect(detection.falseSpots).toBeNull();
    expect(tracks.jaccard).toBeNull();
    expect(trueLineDensityM2).toBeNull();
    expect(estimates.every(({ ratio }) => ratio === null)).toBe(true);
  });

  it('leave the recording that they were planted in as it was', async () => {
    const { sha256 } = taken;
    await taken.reload();
    expect([taken.sha256, taken.deletedAt]).toEqual([sha256, null]);
  });
});

describe('what can not be', () => {
  it.each([
    [{ scene: { ...scene, frames: 5000, widthPx: 2048, heightPx: 2048 } }, 'scene.frames', /million pixels/],
    [{ scene: { ...scene, seeding_m2: 9e9 } }, 'scene.seeding_m2', /puts a tracer on every 2 px²/],
    [{ scene: { ...scene, widthPx: 500, heightPx: 500, frames: 1000, seeding_m2: 3e8 } }, 'scene.seeding_m2', /million tracer images/], // prettier-ignore
    [{ scene: { ...scene, snr: 5 } }, 'scene.brightness_e', /either the brightness or the SNR/],
    [{ conditions: { ...conditions, exposure_s: 1 } }, 'exposure_s', /longer than the frame interval/],
    [{ conditions: { ...conditions, sheetThickness_m: null } }, 'sheetThickness_m', /sheet thickness/],
    [
      { conditions: { ...conditions, heatFlux_W_m2: null }, scene: { ...scene, lineDensity_m2: null } },
      'scene.lineDensity_m2',
      /none follows/,
    ],
    [{ recipe: { longestStepPx: 900 } }, 'recipe.longestStepPx', /longer side of the image/],
    [{ kind: 'planted' }, 'recordingId', /Name the recording/],
  ])('%j is refused with one sentence', async (part, path, sentence) => {
    const { status, body } = await callJson<{ code: string; detail: string; errors: { path: string }[] }>(
      'POST',
      '/api/v1/rehearsals',
      { token: lab.people.experimentalist.token, json: { ...ORDER, ...part } },
    );
    expect([status, body.code, body.errors[0]?.path]).toEqual([422, 'PARAM_RANGE', path]);
    expect(body.detail).toMatch(sentence);
  });

  it('does not plant in what was made for a rehearsal', async () => {
    const { status } = await post({ name: 'Twice', kind: 'planted', recordingId: first.recordingId });
    expect(status).toBe(409);
  });
});

describe('stopping and removing', () => {
  it('stops one at work for good, and removes it only then', async () => {
    const { body } = await post({ ...ORDER, name: 'To stop', scene: { ...scene, frames: 400 } });
    const { token } = lab.people.experimentalist;
    const path = `/api/v1/rehearsals/${body.id}`;
    expect((await callJson('DELETE', path, { token })).status).toBe(409);
    const stopped = await callJson<RehearsalView>('POST', `${path}/stop`, { token });
    expect([stopped.status, stopped.body.state]).toEqual([200, 'stopped']);
    expect((await callJson('POST', `${path}/stop`, { token })).status).toBe(409);
    expect((await callJson('DELETE', path, { token: lab.people.analyst.token })).status).toBe(403);
    expect((await callJson('DELETE', path, { token })).status).toBe(204);
    expect((await callJson('GET', path, { token })).status).toBe(404);
    const acts = await models().AuditEntry.findAll({ where: { subjectId: body.id } });
    expect(acts.map(({ action }) => action).sort()).toEqual(['rehearsal.made', 'rehearsal.removed', 'rehearsal.stopped']); // prettier-ignore
  });
});
