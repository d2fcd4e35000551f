import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { OPEN_PATHS, ROUTES, type ApiRoute, type RouteKey } from '@/app/api/route-table';
import { closeDoorbell } from '@/jobs/doorbell';
import { ACTIONS, grantFor, ROLES, type Role } from '@/lib/access';
import { newId } from '@/lib/ids';
import { problemSchema } from '@/lib/views/common';
import { models } from '@/models';
import { addExport } from '@/models/queries/exports';
import { addMail } from '@/models/queries/mails';
import { addRehearsal } from '@/models/queries/rehearsal-work';
import { addSession } from '@/models/queries/sessions';
import { saveSelection } from '@/models/queries/saved-selections';
import { closeSessionLocks } from '@/models/session-locks';
import { call, routeModule, routePaths, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeAnalysis, makeRecording, makeRun, type LabRows } from '../../helpers/lab-rows';
import { makeAssignment, makeCandidates } from '../../helpers/candidates';
import { REHEARSAL_PLAN } from '../../helpers/rehearsal-plan';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

/** Ids of one thing of each kind, by the name of the parameter that takes it. */
type Things = Record<string, string>;

let database: FreshDatabase;
let own: TestLab;
let other: TestLab;
let things: Things;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  own = await makeTestLab(database.url, 'Own laboratory');
  other = await makeTestLab(database.url, 'Other laboratory');
});
afterAll(async ({}, suite) => {
  await closeDoorbell();
  await closeSessionLocks();
  await database.dropIfGreen({}, suite);
});

/** Everything is made anew for each try, by the experimentalist, so that no try sees another's effect. */
async function makeThings(): Promise<Things> {
  const maker = own.people.experimentalist;
  const campaign = await models().Campaign.create({
    id: newId(),
    labId: own.labId,
    name: 'C',
    createdBy: maker.userId,
  });
  const lab: LabRows = { labId: own.labId, userId: maker.userId, campaignId: campaign.id };
  const run = await makeRun(lab);
  const recording = await makeRecording(lab, { runId: run.id });
  // Done, so that its stream of progress ends.
  const analysis = await makeAnalysis(lab, {
    recordingId: recording.id,
    createdBy: maker.userId,
    state: 'done',
    stage: 'done',
  });
  const [candidateId] = await makeCandidates(lab, analysis.id, 1);
  const assignmentId = await makeAssignment(lab, analysis.id, own.people.annotator.userId);
  // Somebody who asks nothing here: a member that is removed can't ask any more.
  const guest = await models().User.create({ id: newId(), name: 'Guest', email: `${newId()}@lab.test` });
  const membership = await models().Membership.create({
    id: newId(),
    labId: own.labId,
    userId: guest.id,
    roles: ['annotator'],
  });
  const sessionId = await addSession(guest.id, 1, 'test');
  const token = await models().ApiToken.create({
    id: newId(),
    labId: own.labId,
    userId: maker.userId,
    name: 'to revoke',
    tokenHash: Buffer.from(newId()),
    hint: 'bdl_',
    scopes: ['read'],
  });
  const upload = await models().Upload.create({
    id: newId(),
    labId: own.labId,
    userId: maker.userId,
    runId: run.id,
    recordingId: (await makeRecording(lab, { runId: run.id, state: 'arriving' })).id,
    filename: 'a.tif',
    bytes: '10',
    state: 'arriving',
  });
  const mail = await database.sequelize.transaction((transaction) =>
    addMail(
      { labId: own.labId, userId: maker.userId, order: { kind: 'password-changed' }, personal: false },
      transaction,
    ),
  );
  const job = await models().JobRun.create({
    id: newId(),
    labId: own.labId,
    kind: 'send-mail',
    subjectId: mail,
    state: 'failed',
  });
  const exported = await database.sequelize.transaction((transaction) =>
    addExport(
      {
        labId: own.labId,
        userId: maker.userId,
        title: 'Package',
        request: {
          analyses: [analysis.id],
          formats: ['csv'],
          figures: false,
          licence: 'CC0-1.0',
          contributors: [],
        },
      },
      transaction,
    ),
  );
  const rehearsalId = await database.sequelize.transaction((transaction) =>
    addRehearsal(
      {
        labId: own.labId,
        userId: maker.userId,
        name: 'Rehearsal',
        kind: 'simulated',
        plan: REHEARSAL_PLAN,
        recipe: {},
        sourceRecordingId: null,
      },
      transaction,
    ),
  );
  const selection = await saveSelection(
    { labId: own.labId, userId: maker.userId },
    { name: `Selection ${newId()}`, filters: { temperatureFrom_K: '1.8' } },
  );
  return {
    selectionId: selection.id,
    rehearsalId,
    mailId: mail,
    jobId: job.id,
    campaignId: campaign.id,
    runId: run.id,
    recordingId: recording.id,
    analysisId: analysis.id,
    candidateId,
    assignmentId,
    memberId: membership.id,
    sessionId,
    tokenId: token.id,
    upload: upload.id,
    exportId: exported,
    frame: '0',
  };
}

const split = (key: RouteKey) => key.split(' ') as [string, string];
const pathOf = (key: RouteKey) =>
  `/api/v1${split(key)[1].replace(/\{(\w+)\}/g, (_, name: string) => things[name])}`;

/** A body that the schema accepts, so that what is answered is about rights. */
const BODIES: Partial<Record<RouteKey, unknown>> = {
  'POST /campaigns': { name: 'New' },
  'PATCH /campaigns/{campaignId}': { name: 'Renamed' },
  'POST /campaigns/{campaignId}/runs': { name: 'New' },
  'PATCH /runs/{runId}': { name: 'Renamed' },
  'POST /runs/{runId}/folders': { name: 'Frames', files: 2, bytes: 10 },
  'PATCH /recordings/{recordingId}': { name: 'Renamed' },
  // A frame that is not there: what is tested is who may ask, not the computation.
  'POST /recordings/{recordingId}/try': { frames: [999_999] },
  'POST /recordings/{recordingId}/analyses': {},
  // An analysis of nobody: what is tested is who may ask.
  'POST /exports': { analyses: ['01890a5d-ac96-774b-bcce-b302099a8057'] },
  'POST /recipes': { name: 'Recipe', fields: {} },
  'POST /analyses/{analysisId}/corrections': { kind: 'remove', track: 0 },
  'POST /analyses/{analysisId}/corrections/restore': { revision: 0 },
  'POST /analyses/{analysisId}/corrections/carry': { from: newId(), preview: true },
  'POST /analyses/{analysisId}/refine-point': { frame: 999_999, x_px: 0, y_px: 0 },
  'PATCH /people/{memberId}': { roles: ['analyst'] },
  'POST /rehearsals': { name: 'New', conditions: REHEARSAL_PLAN.conditions, scene: { lineDensity_m2: 1e7 } },
  'POST /people': { name: 'New', email: 'new@lab.test', roles: ['analyst'] },
  'POST /tokens': { name: 'New' },
  'POST /selections': { name: 'New', filters: {} },
  'PATCH /selections/{selectionId}': { filters: { signedOff: 'yes' } },
  'PUT /runs/{runId}/exclusion': { reason: 'The heater was off.' },
  'PUT /candidates/{candidateId}/verdict': { verdict: 'yes' },
  'POST /candidates/{candidateId}/settlement': { verdict: 'yes', reason: 'Seen.' },
};
/** Bodies that name things. */
const bodyOf = (key: RouteKey): unknown =>
  key === 'POST /assignments'
    ? { analysis: things.analysisId, reader: own.people.annotator.userId }
    : BODIES[key];

function send(key: RouteKey, token: string | undefined) {
  const [method, path] = split(key);
  const route: ApiRoute = ROUTES[key];
  const headers: Record<string, string> = { 'tus-resumable': '1.0.0' };
  if (route.ifMatch) headers['if-match'] = '"1"';
  if (key === 'POST /uploads') {
    const run = Buffer.from(things.runId).toString('base64');
    headers['upload-length'] = '10';
    headers['upload-metadata'] = `filename ${Buffer.from('a.tif').toString('base64')},run ${run}`;
  }
  if (key === 'PATCH /uploads/{upload}') {
    headers['content-type'] = 'application/offset+octet-stream';
    headers['upload-offset'] = '5';
  }
  const query =
    path === '/search'
      ? '?q=run'
      : path.endsWith('/tracks')
        ? '?from=0&to=1'
        : path.endsWith('/track-points')
          ? '?tracks=0'
          : '';
  return call(method, pathOf(key) + query, { token, headers, json: bodyOf(key) });
}

/** What a refused HEAD has no body for stands in its status alone. */
async function problemOf(response: Response) {
  const text = await response.text();
  return text === '' ? null : problemSchema.parse(JSON.parse(text));
}

const keys = Object.keys(ROUTES) as RouteKey[];
const takesThing = (key: RouteKey) =>
  key.includes('{') || key === 'POST /uploads' || key === 'POST /assignments';

describe('who may do what over HTTP', () => {
  it('every route file on disk stands in the table with each of its methods, and the table names no other', async () => {
    const fileOf = (key: string) => {
      const path = split(key as RouteKey)[1];
      return path.startsWith('/uploads')
        ? '/api/v1/uploads/[[...path]]'
        : `/api/v1${path.replace(/\{(\w+)\}/g, '[$1]')}`;
    };
    const catchAll = '/api/[...path]';
    expect(routePaths()).toEqual([...new Set([...keys.map(fileOf), ...OPEN_PATHS, catchAll])].sort());
    for (const file of new Set(keys.map(fileOf))) {
      if (file.includes('[[')) continue;
      const exported = await routeModule(file);
      const known = keys.filter((key) => fileOf(key) === file).map((key) => split(key)[0]);
      for (const method of ['GET', 'POST', 'PUT', 'PATCH', 'DELETE']) {
        const response = await exported[method]!(new Request('http://127.0.0.1/', { method }), {
          params: Promise.resolve({}),
        });
        // Nobody is signed in: a method that is there asks for that, one that is not says so.
        expect([file, method, response.status]).toEqual([file, method, known.includes(method) ? 401 : 405]);
      }
    }
  });

  it.each(keys)('%s: nobody without signing in', async (key) => {
    things = await makeThings();
    const response = await send(key, undefined);
    expect(response.status).toBe(401);
    expect((await problemOf(response))?.code ?? 'SIGNED_OUT').toBe('SIGNED_OUT');
  });

  describe.each(ROLES)('%s', (role: Role) => {
    it.each(keys)('%s', async (key) => {
      things = await makeThings();
      const grant = grantFor([role], ROUTES[key].action);
      const response = await send(key, own.people[role].token);
      if (grant === null) {
        expect(response.status).toBe(403);
        const problem = await problemOf(response);
        if (problem) expect(problem.detail).toMatch(/It takes: /);
      } else {
        // Anything but a refusal of the person: the state of a made-up thing may still forbid the act.
        const refused = response.status === 401 || response.status === 403;
        const reason = `${response.status} ${await response.clone().text()}`;
        expect([refused, reason]).toEqual([expectRefused(key, role), reason]);
      }
    });

    it.each(keys.filter(takesThing))('%s of another laboratory is not there', async (key) => {
      things = await makeThings();
      const granted = grantFor([role], ROUTES[key].action) !== null;
      const response = await send(key, other.people[role].token);
      expect(response.status).toBe(granted ? 404 : 403);
    });
  });
});

/** Everything was made by the experimentalist: `own` grants of others, and their uploads, are refused. */
function expectRefused(key: RouteKey, role: Role): boolean {
  if (role === 'experimentalist') return false;
  if (key === 'HEAD /uploads/{upload}' || key === 'PATCH /uploads/{upload}') return true;
  const needsThing = key.includes('{');
  return needsThing && grantFor([role], ROUTES[key].action) === 'own';
}

describe('scopes of a token', () => {
  it.each(keys)('%s: not without its scope', async (key) => {
    things = await makeThings();
    const route = ROUTES[key];
    const role = ROLES.find((candidate) => grantFor([candidate], route.action) !== null)!;
    const { makeToken } = await import('@/auth/tokens');
    const { token, tokenHash, hint } = makeToken();
    const scopes = (['read', 'write', 'review', 'export'] as const).filter(
      (scope) => scope !== ACTIONS[route.action].scope,
    );
    const { userId } = own.people[role];
    await models().ApiToken.create({
      id: newId(),
      labId: own.labId,
      userId,
      name: 't',
      tokenHash,
      hint,
      scopes,
    });
    const response = await send(key, token);
    expect(response.status).toBe(403);
  });
});
