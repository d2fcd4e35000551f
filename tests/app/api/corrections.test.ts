import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { newId } from '@/lib/ids';
import { estimatesJson } from '@/lib/tables/estimates-json';
import { reconnectionsCsv } from '@/lib/tables/reconnections-csv';
import { tableTracks } from '@/lib/tables/track-rows';
import { tracksCsv } from '@/lib/tables/tracks-csv';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import type { AnalysisView, CandidateView } from '@/lib/views/analysis-view';
import type { ListView, ProblemView } from '@/lib/views/common';
import type {
  CorrectionList,
  CorrectionsStored,
  MarksView,
  PresenceView,
  TrackPointsView,
} from '@/lib/views/correction-view';
import type { Estimate } from '@/tracking/estimates/estimate';
import { marksOfScene } from '@/tracking/simulate/marks-of-scene';
import { selectRows } from '@/models/queries/select';
import { call, callJson, webSettings } from '../../helpers/call-route';
import { CONDITIONS, makeDoneAnalysis, remeasureNow, smallTangle } from '../../helpers/corrected-analysis';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

/** Flow is measured in this process, several times in a test. */
vi.setConfig({ testTimeout: 240_000 });

let database: FreshDatabase;
let lab: TestLab;
let made: Awaited<ReturnType<typeof makeDoneAnalysis>>;
let token: string;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url);
  made = await makeDoneAnalysis(lab);
  ({ token } = lab.people.annotator);
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

type Problem = ProblemView & {
  revision: number;
  current: CorrectionsStored & { corrections: CorrectionsStored['items'] };
};
const get = <T>(below: string, who = token) => callJson<T>('GET', `${made.path}${below}`, { token: who });
const head = async () => (await get<CorrectionList>('/corrections?limit=1&sort=-revision')).body;

async function send<T = CorrectionsStored>(
  json: unknown,
  revision?: number,
  options: { key?: string; who?: string } = {},
) {
  const at = revision ?? (await head()).revision;
  const headers: Record<string, string> = { 'if-match': `"${at}"` };
  if (options.key) headers['idempotency-key'] = options.key;
  return callJson<T>('POST', `${made.path}/corrections`, { token: options.who ?? token, json, headers });
}

/** The longest track now, and those that nothing was done to. */
const lengthOf = (track: number) => made.tracks.start[track + 1] - made.tracks.start[track];
const longTracks = () =>
  Array.from({ length: made.tracks.count }, (_, i) => i).sort((a, b) => lengthOf(b) - lengthOf(a));
const rawFrames = (track: number) => {
  const [from, to] = [made.tracks.start[track], made.tracks.start[track + 1] - 1];
  return [made.tracks.frame[from], made.tracks.frame[to]] as const;
};
const tables = ['tracks.csv', 'velocities.csv', 'velocity-pdf.csv', 'reconnections.csv', 'estimates.json'];
const table = async (name: string, query = '') =>
  (await call('GET', `${made.path}/${name}${query}`, { token: lab.people.analyst.token })).text();

describe('a correction', () => {
  it('needs the revision that it starts from', async () => {
    const json = { kind: 'remove', track: 0 };
    expect((await callJson('POST', `${made.path}/corrections`, { token, json })).status).toBe(428);
  });

  it('is appended, attributed and shown in every answer about tracks', async () => {
    const [track] = longTracks();
    const [first, last] = rawFrames(track);
    const frame = Math.round((first + last) / 2);
    const answer = await send({ kind: 'split', track, frame }, 0);
    expect(answer.status).toBe(201);
    expect(answer.headers.get('etag')).toBe('"1"');
    const [item] = answer.body.items;
    expect(item).toMatchObject({
      kind: 'split',
      track,
      frame,
      revision: 1,
      inForce: true,
      madeTrack: made.tracks.count,
    });
    expect(item.by).toEqual({ id: lab.people.annotator.userId, name: lab.people.annotator.name });

    const points = await get<TrackPointsView>(`/track-points?tracks=${track},${made.tracks.count}`);
    expect(points.body.tracks.map((one) => [one.frame[0], one.frame.at(-1)])).toEqual([
      [first, frame - 1],
      [frame, last],
    ]);
    const csv = await table('tracks.csv');
    expect(csv).toContain(`\r\n${made.tracks.count},${frame},`);
    expect(await table('tracks.csv', '?corrections=none')).toBe(
      [...tracksCsv(tableTracks(made.tracks, made.measures.tracks), CONDITIONS)].join(''),
    );
    const window = await get<{ tracks: number[]; changed: number[] }>(`/tracks?from=${first}&to=${last}`);
    expect(window.body.tracks).toContain(made.tracks.count);
    expect(window.body.changed.sort()).toEqual([track, made.tracks.count].sort());
    const analysis = (await get<AnalysisView>('')).body;
    expect(analysis).toMatchObject({ correctionsRevision: 1 });
    expect(analysis.staleSince).not.toBeNull();
  });

  it('is refused with one sentence, and changes nothing', async () => {
    const before = await head();
    for (const [json, path, detail] of [
      [{ kind: 'split', track: 99_999, frame: 3 }, 'track', 'There is no track 99999 now.'],
      [
        { kind: 'turn', track: 1 },
        'kind',
        'kind must be one of split, join, trim, remove, add-point, move-point, reclass, mark-line, complete-frame, undo.',
      ],
      [{ kind: 'split', track: 1, frame: -1 }, 'frame', 'frame must be a frame number from 0.'],
      [{}, 'corrections', 'Send one correction with its kind, or corrections: a list of them.'],
      [{ corrections: [] }, 'corrections', 'At least 1 correction.'],
      [
        {
          corrections: [
            { kind: 'remove', track: 1 },
            { kind: 'remove', track: 1 },
          ],
        },
        'corrections.1.track',
        'There is no track 1 now.',
      ],
      [{ kind: 'mark-line', frame: 1, points: [[1, 1]] }, 'points', 'A marked line needs at least 2 points.'],
      [
        { kind: 'mark-line', frame: 1, points: [[1, 1], [1, 200]] }, // prettier-ignore
        'points.1',
        'Point 2 of the line lies outside the image of 200 x 200 px.',
      ],
      [{ kind: 'complete-frame', frame: 80 }, 'frame', 'The recording has frames 0 to 79. Received 80.'],
      [{ kind: 'undo', of: newId() }, 'of', 'There is no such correction in this analysis.'],
    ] as const) {
      const { status, body } = await send<Problem>(json);
      expect([status, body.detail, body.errors[0].path]).toEqual([422, detail, path]);
    }
    expect(await head()).toEqual(before);
  });

  it('that comes too late is refused, and told what was done meanwhile; nothing is lost', async () => {
    const { revision } = await head();
    const [one, two] = longTracks().slice(1, 3);
    const [first, second] = await Promise.all([
      send<Problem>({ kind: 'remove', track: one }, revision),
      send<Problem>({ kind: 'remove', track: two }, revision, { who: lab.people.experimentalist.token }),
    ]);
    const [late, early] = first.status === 201 ? [second, first] : [first, second];
    expect([early.status, late.status]).toEqual([201, 412]);
    expect(late.headers.get('etag')).toBe(`"${revision + 1}"`);
    expect(late.body.current.revision).toBe(revision + 1);
    expect(late.body.current.corrections).toMatchObject([{ kind: 'remove', revision: revision + 1 }]);
    const missing = late === first ? one : two;
    const again = await send({ kind: 'remove', track: missing }, late.body.current.revision);
    expect(again.status).toBe(201);
    const points = await get<TrackPointsView>(`/track-points?tracks=${one},${two}`);
    expect(points.body.tracks).toEqual([]);
  });

  it('sent again after a lost answer is stored once', async () => {
    const track = longTracks()[3];
    const { revision } = await head();
    const key = newId();
    const first = await send({ kind: 'remove', track }, revision, { key });
    // The table of answers is gone as well, as after a crash between the two.
    await database.sequelize.query('DELETE FROM idempotency_keys');
    const second = await send({ kind: 'remove', track }, revision, { key });
    expect([first.status, second.status]).toEqual([201, 201]);
    expect(second.body.items).toEqual(first.body.items);
    expect((await head()).revision).toBe(revision + 1);
  });

  it('of many people at once loses and doubles none', async () => {
    const { revision } = await head();
    const tracks = longTracks().slice(10, 22);
    const people = ['annotator', 'experimentalist', 'principal_investigator'] as const;
    await Promise.all(
      people.map(async (role, turn) => {
        let at = revision;
        for (const track of tracks.filter((_, i) => i % people.length === turn)) {
          for (;;) {
            const { status, body } = await send<Problem>(
              { kind: 'reclass', track, population: 'undecided' },
              at,
              {
                who: lab.people[role].token,
              },
            );
            at = status === 201 ? body.revision : body.current.revision;
            if (status === 201) break;
            expect(status).toBe(412);
          }
        }
      }),
    );
    const log = (await get<CorrectionList>(`/corrections?after=${revision}&limit=200`)).body;
    expect(log.items.map(({ track }) => track).sort()).toEqual(tracks.sort());
    expect(log.items.map((item) => item.revision)).toEqual(tracks.map((_, i) => revision + 1 + i));
  });
});

describe('undo and restore', () => {
  it('a gesture goes and comes back as a whole, and names what builds on it', async () => {
    const [track] = longTracks().slice(30);
    const [first, last] = rawFrames(track);
    const gesture = newId();
    const frame = Math.round((first + last) / 2);
    const next = (await head()).nextTrack;
    const { body } = await send({
      corrections: [
        { kind: 'split', track, frame, gesture },
        { kind: 'remove', track: next, gesture },
      ],
    });
    const frames = async () => {
      const points = await get<TrackPointsView>(`/track-points?tracks=${track},${next}`);
      return points.body.tracks.map((one) => [one.track, one.frame[0], one.frame.at(-1)]);
    };
    expect(await frames()).toEqual([[track, first, frame - 1]]);
    const undo = await send({ kind: 'undo', of: body.items[1].id });
    expect(await frames()).toEqual([[track, first, last]]);
    await send({ kind: 'undo', of: undo.body.items[0].id });
    expect(await frames()).toEqual([[track, first, frame - 1]]);
    await send({ kind: 'trim', track, from: first + 1, to: last });
    const refused = await send<Problem>({ kind: 'undo', of: body.items[0].id });
    expect(refused.status).toBe(409);
    expect(refused.body.detail).toMatch(/can't be taken back alone: correction \d+ builds on/);
    const closed = await send<Problem>({ kind: 'remove', track, gesture });
    expect([closed.status, closed.body.errors[0].path]).toEqual([422, 'gesture']);
  });

  it('leads back to the first revision, and then all tables have their first bytes', async () => {
    await remeasureNow(lab.labId, made.analysisId);
    const { revision } = await head();
    const headers = { 'if-match': `"${revision}"` };
    const restore = { token, headers, json: { revision: 0 } };
    expect((await callJson('POST', `${made.path}/corrections/restore`, restore)).status).toBe(201);
    await remeasureNow(lab.labId, made.analysisId);
    for (const name of tables) {
      const [now, raw] = [await table(name), await table(name, '?corrections=none')];
      if (name !== 'reconnections.csv') expect([name, now === raw]).toEqual([name, true]);
    }
    expect(await table('tracks.csv')).toBe(
      [...tracksCsv(tableTracks(made.tracks, made.measures.tracks), CONDITIONS)].join(''),
    );
    expect(await table('estimates.json')).toBe(estimatesJson(made.measures.estimates));
    expect(await table('velocity-pdf.csv')).toBe([...velocityPdfCsv(made.measures.pdfs)].join(''));
    const analysis = (await get<AnalysisView>('')).body;
    expect([analysis.staleSince, analysis.summary?.tracks]).toEqual([null, made.tracks.count]);
    const log = (await get<CorrectionList>('/corrections?limit=200')).body;
    expect(log.items.filter(({ kind, inForce }) => kind !== 'undo' && inForce)).toEqual([]);
  });
});

describe('results of corrected tracks', () => {
  it('are measured anew, the raw ones kept beside; candidates that are the same event keep id and number', async () => {
    const list = async () =>
      (await get<ListView<CandidateView>>('/candidates?limit=200&sort=event')).body.items;
    const before = await list();
    expect(before.length).toBeGreaterThan(1);
    const [gone, stays] = before;
    await send({ kind: 'remove', track: gone.trackA });
    expect((await table('reconnections.csv')).split('\r\n')).toHaveLength(before.length + 2);
    await remeasureNow(lab.labId, made.analysisId);
    const after = await list();
    expect(after.map(({ id }) => id)).not.toContain(gone.id);
    expect(after.find(({ id }) => id === stays.id)).toMatchObject({
      event: stays.event,
      trackA: stays.trackA,
    });
    expect(await table('reconnections.csv', '?corrections=none')).toBe(
      [...reconnectionsCsv(made.measures.candidates)].join(''),
    );
    const { items } = (await get<CorrectionList>('/corrections?sort=-revision&limit=1')).body;
    await send({ kind: 'undo', of: items[0].id });
    await remeasureNow(lab.labId, made.analysisId);
    expect((await list()).find(({ id }) => id === gone.id)).toMatchObject({ event: gone.event });
  });

  it('a person’s population holds for its frames in the tables', async () => {
    const track = longTracks()[4];
    const [first, last] = rawFrames(track);
    await send({ kind: 'reclass', track, population: 'undecided', from: first + 2, to: first + 4 });
    await remeasureNow(lab.labId, made.analysisId);
    const rows = (await table('tracks.csv')).split('\r\n').map((row) => row.split(','));
    const mine = rows.filter(([number]) => number === String(track));
    expect(mine).toHaveLength(last - first + 1);
    expect(mine.slice(2, 5).map((row) => [row[10], row[11]])).toEqual(Array(3).fill(['undecided', '']));
    const velocities = (await table('velocities.csv')).split('\r\n').map((row) => row.split(','));
    const starts = velocities
      .filter((row) => row[0] === String(track) && row[3] === '1')
      .map((row) => Number(row[1]));
    expect(starts).not.toContain(first + 1);
    expect(starts).not.toContain(first + 4);
    expect(starts).toContain(first + 5);
  });

  it('are asked for once, after a quiet while', async () => {
    const jobs = await selectRows<{ waits: boolean }>(
      `SELECT not_before > now() AS waits FROM job_runs WHERE kind = 'remeasure-tracks' AND subject_id = $1 AND state = 'waiting'`,
      [made.analysisId],
    );
    expect(jobs).toEqual([{ waits: true }]);
  });
});

describe('lines that people mark', () => {
  const estimate = async (method: string) => {
    const all = JSON.parse(await table('estimates.json')) as Estimate[];
    return all.find((one) => one.method === method && one.quantity === 'line_density')!;
  };

  it('give a line density of their own, for which nothing else is measured anew', async () => {
    await remeasureNow(lab.labId, made.analysisId);
    expect((await estimate('marked-chains')).note).toMatch(/^Nobody has marked lines/);
    const pdfs = await table('velocity-pdf.csv');
    const marked = marksOfScene(smallTangle(), [10, 40, 70]);
    for (const { frame, lines } of marked) {
      const corrections = [
        ...lines.map((points) => ({ kind: 'mark-line', frame, points })),
        { kind: 'complete-frame', frame },
      ];
      expect((await send({ corrections })).status).toBe(201);
    }
    const listed = (await get<MarksView>('/marks')).body;
    expect(listed.items.filter(({ kind }) => kind === 'mark-line').map(({ points }) => points)).toEqual(
      marked.flatMap(({ lines }) => lines),
    );
    expect(listed.items[0].by).toEqual({ id: lab.people.annotator.userId, name: lab.people.annotator.name });

    expect(await remeasureNow(lab.labId, made.analysisId)).toEqual(['judgeTracks', 'measureFlowPart']);
    const { inputs, note } = await estimate('marked-chains');
    expect(inputs.completeFrames.value, note).toBe(3);
    expect(inputs.lines.value).toBeGreaterThan(4);
    expect(await table('velocity-pdf.csv')).toBe(pdfs);
    expect((await get<AnalysisView>('')).body.staleSince).toBeNull();
    // The whole measurement says the same.
    const [, track] = longTracks().slice(40);
    await send({ kind: 'split', track, frame: rawFrames(track)[0] + 2 });
    expect(await remeasureNow(lab.labId, made.analysisId)).toEqual(['measureFlow']);
    expect((await estimate('marked-chains')).inputs.lines).toEqual(inputs.lines);
  });

  it('are taken back like every correction', async () => {
    const { items } = (await get<MarksView>('/marks')).body;
    const undos = items.map(({ id }) => ({ kind: 'undo', of: id }));
    expect((await send({ corrections: undos })).status).toBe(201);
    expect((await get<MarksView>('/marks')).body.items).toEqual([]);
    expect(await remeasureNow(lab.labId, made.analysisId)).toEqual(['judgeTracks', 'measureFlowPart']);
    expect((await estimate('marked-chains')).note).toMatch(/^Nobody has marked lines/);
  });
});

it('says who else has the analysis open', async () => {
  const post = (who: string, json: unknown) =>
    callJson<{ items: PresenceView[] }>('POST', `${made.path}/presence`, { token: who, json });
  await post(token, { place: 'editor', frame: 12 });
  const { body } = await post(lab.people.experimentalist.token, { place: 'history' });
  expect(body.items).toMatchObject([
    { person: { name: lab.people.annotator.name }, place: 'editor', frame: 12 },
  ]);
  expect((await get<{ items: PresenceView[] }>('/presence')).body.items.map(({ place }) => place)).toEqual([
    'history',
  ]);
});

it('nobody else’s analysis can be corrected or looked into', async () => {
  const other = await makeTestLab(database.url, 'Another Laboratory');
  const headers = { 'if-match': '"0"' };
  const options = { token: other.people.annotator.token, headers, json: { kind: 'remove', track: 0 } };
  expect((await callJson('POST', `${made.path}/corrections`, options)).status).toBe(404);
  expect((await get('/corrections', other.people.annotator.token)).status).toBe(404);
  expect((await get('/presence', other.people.annotator.token)).status).toBe(404);
  expect((await get('/marks', other.people.annotator.token)).status).toBe(404);
});
