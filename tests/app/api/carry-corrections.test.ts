import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ListView, ProblemView } from '@/lib/views/common';
import type { AuditView } from '@/lib/views/lab-view';
import type { CarryReport, CorrectionList, TrackPointsView } from '@/lib/views/correction-view';
import { packTracks } from '@/tracking/corrections/pieces';
import { trackSlice } from '@/tracking/track-slice';
import type { Tracks } from '@/tracking/types';
import { callJson, webSettings } from '../../helpers/call-route';
import { addDoneAnalysis, makeDoneAnalysis, tangleTracks } from '../../helpers/corrected-analysis';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

const own = tangleTracks();
const lengthOf = (track: number) => own.start[track + 1] - own.start[track];
/** No other tracer comes so near to these that they could not be told apart. */
const isAlone = (track: number) =>
  Array.from({ length: own.frame.length }, (_, i) => i).every((i) => {
    const k = own.start[track] + own.frame[i] - own.frame[own.start[track]];
    const itself = i >= own.start[track] && i < own.start[track + 1];
    const together = k >= own.start[track] && k < own.start[track + 1];
    return itself || !together || Math.hypot(own.xPx[i] - own.xPx[k], own.yPx[i] - own.yPx[k]) > 3;
  });
const [SPLIT, RECLASSED, REMOVED, MISSING, TRIMMED] = Array.from({ length: own.count }, (_, i) => i)
  .sort((a, b) => lengthOf(b) - lengthOf(a))
  .filter(isAlone);
const middle = own.frame[own.start[SPLIT]] + Math.floor(lengthOf(SPLIT) / 2);
const firstTrimmed = own.frame[own.start[TRIMMED]];

/** As a newer analysis of the same frames gives them: other numbers, places a little off, one tracer not found. */
function newerTracks(): Tracks {
  const slices = Array.from({ length: own.count }, (_, i) => trackSlice(own, own.count - 1 - i)).filter(
    ({ track }) => track !== MISSING,
  );
  const { tracks } = packTracks(slices);
  return { ...tracks, xPx: tracks.xPx.map((x, i) => x + 0.1 * Math.sin(i)) };
}
/** Number of a track in the newer analysis. */
const there = (track: number) => own.count - 1 - track - (track < MISSING ? 1 : 0);

let database: FreshDatabase;
let lab: TestLab;
let older: Awaited<ReturnType<typeof makeDoneAnalysis>>;
let newer: Awaited<ReturnType<typeof addDoneAnalysis>>;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
  older = await makeDoneAnalysis(lab, own);
  newer = await addDoneAnalysis(lab, older.recording.id, newerTracks());
  const corrections = [
    { kind: 'split', track: SPLIT, frame: middle },
    { kind: 'reclass', track: RECLASSED, population: 'undecided' },
    { kind: 'remove', track: REMOVED },
    { kind: 'reclass', track: MISSING, population: 'trapped' },
    { kind: 'trim', track: TRIMMED, from: firstTrimmed + 1, to: firstTrimmed + 3 },
  ];
  const stored = await send('/corrections', { corrections }, 0, older.path);
  const undone = { kind: 'undo', of: stored.body.items[4].id };
  expect((await send('/corrections', undone, 5, older.path)).status).toBe(201);
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

const token = (role: keyof TestLab['people'] = 'annotator') => lab.people[role].token;
const send = (below: string, json: unknown, revision: number, path = newer.path, who = token()) =>
  callJson<CarryReport & ProblemView & { items: CorrectionList['items'] }>('POST', path + below, {
    token: who,
    json,
    headers: { 'if-match': `"${revision}"` },
  });
const log = async () =>
  (await callJson<CorrectionList>('GET', `${newer.path}/corrections`, { token: token() })).body;

describe('corrections carried to a newer analysis', () => {
  it('are told before anything is stored', async () => {
    const { status, body } = await send('/corrections/carry', { from: older.analysisId, preview: true }, 0);
    expect([status, body.preview, body.carried, body.already, body.revision]).toEqual([200, true, 3, 0, 0]);
    expect(body.left.map(({ words, reason }) => [words, reason])).toEqual([
      [`called track ${MISSING} trapped`, `No track here passes where track ${MISSING} did.`],
    ]);
    expect((await log()).items).toEqual([]);
  });

  it('are refused for what is no analysis of the same recording, for readers of an older state and of other labs', async () => {
    const stranger = await makeDoneAnalysis(lab, own);
    for (const from of [stranger.analysisId, newer.analysisId, lab.labId]) {
      const { status, body } = await send('/corrections/carry', { from }, 0);
      expect([status, body.errors]).toEqual([
        422,
        [{ path: 'from', message: 'from must be another finished analysis of the same recording.' }],
      ]);
    }
    expect((await send('/corrections/carry', { from: older.analysisId }, 7)).status).toBe(412);
    const other = (await makeTestLab(database.url, 'Other laboratory')).people.annotator.token;
    const from = older.analysisId;
    expect((await send('/corrections/carry', { from }, 0, newer.path, other)).status).toBe(404);
  });

  it('are matched by place and time, attributed, and lead back to where they come from', async () => {
    const { status, body } = await send('/corrections/carry', { from: older.analysisId }, 0);
    expect([status, body.preview, body.carried, body.revision]).toEqual([200, false, 3, 3]);
    const { items } = await log();
    expect(items).toMatchObject([
      { kind: 'split', track: there(SPLIT), frame: middle, by: { name: lab.people.annotator.name } },
      { kind: 'reclass', track: there(RECLASSED), population: 'undecided' },
      { kind: 'remove', track: there(REMOVED) },
    ]);
    const before = (await callJson<CorrectionList>('GET', `${older.path}/corrections`, { token: token() }))
      .body.items;
    expect(items.map(({ carriedFrom }) => carriedFrom)).toEqual(before.slice(0, 3).map(({ id }) => id));
    const points = await callJson<TrackPointsView>(
      'GET',
      `${newer.path}/track-points?tracks=${there(SPLIT)},${there(REMOVED)}`,
      { token: token() },
    );
    expect(points.body.tracks.map(({ track, frame }) => [track, frame.at(-1)])).toEqual([
      [there(SPLIT), middle - 1],
    ]);
    const audit = await callJson<ListView<AuditView>>('GET', '/api/v1/audit?limit=20', {
      token: token('principal_investigator'),
    });
    expect(audit.body.items.map(({ action }) => action)).toContain('analysis.corrections-carried');
  });

  it('are not carried twice, also when they were taken back', async () => {
    const { items } = await log();
    await send('/corrections', { kind: 'undo', of: items[2].id }, 3);
    const { body } = await send('/corrections/carry', { from: older.analysisId }, 4);
    expect(body).toMatchObject({ carried: 0, before: 3, revision: 4 });
    expect(body.left).toHaveLength(1);
    await send('/corrections', { kind: 'remove', track: TRIMMED }, 6, older.path);
    const again = await send('/corrections/carry', { from: older.analysisId }, 4);
    expect(again.body).toMatchObject({ carried: 1, before: 3, revision: 5 });
    expect((await log()).items.at(-1)).toMatchObject({ kind: 'remove', track: there(TRIMMED) });
  });
});
