import { createHash } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ProblemView } from '@/lib/views/common';
import type { RecordingView } from '@/lib/views/recording-view';
import { newId } from '@/lib/ids';
import { ApiScript } from '../helpers/api-client';
import { BAD_STACKS, type BadStack } from '../helpers/bad-stacks';
import { signedInCookie } from '../helpers/sign-in';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import { closeTusClient, FILE, TusClient, UPLOADS } from '../helpers/tus-client';
import { until } from '../helpers/until';

// Rows, codes and sentences are those of the project's own table of bad inputs, B1 to B44, here sent to
// the running server; each kind has more cases beside the part that judges it.

const { baseUrl, databaseUrl } = sharedServer();
let lab: TestLab;
let client: TusClient;
let cookie: string;
/** Address of the runs of a campaign. */
let runs: string;
const judged = new Map<string, RecordingView>();

async function upload({ row, name }: BadStack, body: Uint8Array): Promise<void> {
  const metadata = client.metadata({ filename: name });
  const created = await client.post({ 'Upload-Length': String(body.length), 'Upload-Metadata': metadata });
  if (body.length > 0) await client.patch(created.headers.get('location')!, 0, body);
  const id = created.headers.get('beadline-recording')!;
  judged.set(row, { id } as RecordingView);
}

beforeAll(async () => {
  // All are made before the first request: a connection must not lie idle while the largest is.
  const files = BAD_STACKS.map((stack) => [stack, new Uint8Array(stack.bytes())] as const);
  lab = await makeTestLab(databaseUrl);
  const script = new ApiScript(baseUrl, lab.people.experimentalist.token);
  const campaign = await script.post<{ id: string }>('/api/v1/campaigns', { name: '=1+1' });
  runs = `/api/v1/campaigns/${campaign.id}/runs`;
  const run = await script.post<{ id: string }>(runs, {
    name: 'Bad input',
    pixelSize_m: 5e-6,
    frameInterval_s: 5e-3,
  });
  client = new TusClient(script, run.id);
  cookie = await signedInCookie(baseUrl, lab.people.experimentalist);
  for (const [stack, body] of files) await upload(stack, body);
}, 120_000);
afterAll(closeTusClient);

const escaped = (text: string) =>
  text.replaceAll('&', '&amp;').replaceAll("'", '&#x27;').replaceAll('"', '&quot;').replaceAll('<', '&lt;');
/** How far the bomb expands is the compressor's affair. */
const plain = (text: string) => text.replace(/expands \d+-fold/, 'expands N-fold');

describe('a stored stack is judged in one sentence, which API and page tell', () => {
  it.each(BAD_STACKS)('$row $code', { timeout: 240_000 }, async ({ row, told, code, detail }) => {
    const look = () => client.script.json<RecordingView>(`/api/v1/recordings/${judged.get(row)!.id}`);
    const recording = await until(look, ({ state }) => state === 'ready' || state === 'refused', {
      withinMs: 200_000,
      everyMs: 250,
    });
    expect(recording.state).toBe(told === 'refusal' ? 'refused' : 'ready');
    const notes = told === 'refusal' ? [recording.refusal!] : recording.warnings;
    expect(notes.map((note) => ({ code: note.code, detail: plain(note.detail) }))).toContainEqual({
      code,
      detail,
    });
    const page = await fetch(`${baseUrl}/recordings/${recording.id}`, { headers: { cookie } });
    expect(page.status).toBe(200);
    expect(plain(await page.text())).toContain(escaped(detail));
  });
});

interface Answer {
  status: number;
  code: string;
  detail: string;
}
const send = async (method: string, path: string, json?: unknown, headers: Record<string, string> = {}) => {
  const body = typeof json === 'string' ? json : json === undefined ? undefined : JSON.stringify(json);
  const init = { method, body, headers: { 'Content-Type': 'application/json', ...headers } };
  const response = await client.script.request(path, body === undefined ? { method, headers } : init);
  const text = await response.text();
  const problem = (text.startsWith('{') ? JSON.parse(text) : {}) as ProblemView & { current?: unknown };
  return { ...problem, status: response.status, code: problem.code, detail: problem.detail };
};
const newRun = async (fields: object) => send('POST', runs, { name: 'Run', ...fields });
const is = (status: number, code: string, detail?: string): Partial<Answer> => ({
  status,
  code,
  ...(detail === undefined ? {} : { detail }),
});

describe('what a request brings is judged in its answer', () => {
  it.each([
    [-3e-6, "Pixel size must be a number above 0 and at most 1000 um (you typed '-3')."],
    [0, "Pixel size must be a number above 0 and at most 1000 um (you typed '0')."],
  ])('B32 a pixel size of %d m', async (pixelSize_m, detail) => {
    expect(await newRun({ pixelSize_m })).toMatchObject(is(422, 'FIELD_RANGE', detail));
  });
  it.each(['1,5', '', 'NaN'])('B32 a frame interval of %j', async (frameInterval_s) => {
    expect((await newRun({ frameInterval_s })).status).toBe(422);
  });
  it('B32 a number beyond all numbers', async () => {
    expect((await send('POST', runs, '{"name":"Run","pixelSize_m":1e999}')).status).toBe(422);
  });

  it('B33 a slip of the unit, until it is confirmed', async () => {
    expect(await newRun({ temperature_K: 1.9e-3 })).toMatchObject(
      is(
        422,
        'SUSPICIOUS',
        'Temperature 0.0019 K is outside 0.8-2.1768 K for two-fluid He II. Did you mean 1.9 K?',
      ),
    );
    expect((await newRun({ temperature_K: 1.9e-3, confirm: ['temperature_K'] })).status).toBe(201);
  });

  it('B34 markup in a name is text, on the page too', async () => {
    const name = '<img src=x onerror=alert(1)>';
    const { id } = await client.script.post<{ id: string }>('/api/v1/campaigns', { name });
    const html = await (await fetch(`${baseUrl}/campaigns/${id}`, { headers: { cookie } })).text();
    expect(html).toContain('&lt;img src=x onerror=alert(1)&gt;');
    expect(html).not.toContain(name);
  });
  it.each([
    ['x'.repeat(10_000), 'NAME_LENGTH', 'At most 200 characters.'],
    ['right\u202eleft', 'NAME_CHARS', 'Hidden or control characters are not accepted in names.'],
  ])('B34 a name that is refused: %#', async (name, code, detail) => {
    expect(await send('POST', '/api/v1/campaigns', { name })).toMatchObject(is(422, code, detail));
  });

  it('B35 a name that a spreadsheet would compute is marked as text in a table', async () => {
    const admin = new ApiScript(baseUrl, lab.people.lab_administrator.token);
    const table = await admin.text('/api/v1/audit.csv');
    expect(table).toMatch(/,'=1\+1(,|\r\n)/);
  });

  it('B36 a wrong offset', async () => {
    const { url } = await client.begin();
    const response = await client.patch(url, 5, FILE.subarray(0, 10));
    expect([response.status, await client.offset(url)]).toEqual([409, 0]);
    expect(((await response.json()) as ProblemView).detail).toMatch(/^Upload-Offset conflict/);
  });

  it('B37 more bytes than announced, or than allowed', async () => {
    const { url } = await client.begin(100);
    const more = await client.patch(url, 0, FILE.subarray(0, 101));
    expect([more.status, ((await more.json()) as ProblemView).detail]).toEqual([
      413,
      'Larger than announced (100 bytes).',
    ]);
    const most = await client.post({ 'Upload-Length': '50000000001' });
    expect([most.status, ((await most.json()) as ProblemView).detail]).toEqual([413, 'Limit is 50 GB.']);
  });

  it('B38 a piece whose checksum differs', async () => {
    const { url } = await client.begin();
    const response = await client.patch(url, 0, FILE, {
      'Upload-Checksum': 'sha1 AAAAAAAAAAAAAAAAAAAAAAAAAAA=',
    });
    expect([response.status, await client.offset(url)]).toEqual([460, 0]);
  });

  it('B38 a whole file whose SHA-256 is not the one that its sender told', async () => {
    const metadata = client.metadata({ sha256: '3a'.repeat(32) });
    const created = await client.post({ 'Upload-Metadata': metadata });
    await client.patch(created.headers.get('location')!, 0, FILE);
    const id = created.headers.get('beadline-recording')!;
    const look = () => client.script.json<RecordingView>(`/api/v1/recordings/${id}`);
    const { refusal } = await until(look, ({ state }) => state === 'refused', {
      withinMs: 60_000,
      everyMs: 250,
    });
    const got = createHash('sha256').update(FILE).digest('hex');
    expect(refusal?.code).toBe('CHECKSUM');
    expect(refusal?.detail).toContain(got.slice(0, 2));
    expect(refusal?.detail).toContain('3a');
    expect(refusal?.detail).toMatch(/^SHA-256 differs/);
  });

  it('B39 an id that climbs, holds NUL, or is another laboratory’s answers as an unknown one', async () => {
    const other = await TusClient.inNewLab(baseUrl, databaseUrl);
    const { url } = await other.begin();
    const statuses = await Promise.all(
      [`${UPLOADS}/..%2F..%2Fsecrets.json`, `${UPLOADS}/%00`, url, `${UPLOADS}/${newId()}`].map(
        async (path) => (await client.send('DELETE', path)).json() as Promise<ProblemView>,
      ),
    );
    for (const { status, detail } of statuses) {
      expect([status, detail]).toEqual([404, 'There is no such upload in this laboratory.']);
    }
  });

  it.each(['filename !!!', 'filename YQ==,filename YQ==', 'filename YQ0KYg=='])(
    'B40 the metadata %j',
    async (bad) => {
      const response = await client.post({ 'Upload-Metadata': bad });
      const { detail } = (await response.json()) as ProblemView;
      expect([response.status, detail.slice(0, 26)]).toEqual([400, 'Upload-Metadata is invalid']);
    },
  );

  it.each([
    ['of 5 MB', JSON.stringify({ name: 'x'.repeat(5e6) }), 413, 'TOO_LARGE'],
    ['nested 100 deep', `{"name":${'['.repeat(100)}${']'.repeat(100)}}`, 400, 'BAD_JSON'],
    ['with a key that reaches a prototype', '{"name":"a","__proto__":{"x":1}}', 400, 'BAD_JSON'],
  ])('B41 a body %s', async (_, body, status, code) => {
    expect(await send('POST', '/api/v1/campaigns', body)).toMatchObject(is(status, code));
  });

  it.each([
    ['sort=x', "Unknown sort field 'x'."],
    ['page=-1', undefined],
    ['limit=1000000000', undefined],
    ['limit=0', undefined],
  ])('B42 a list with %s', async (query, detail) => {
    expect(await send('GET', `/api/v1/campaigns?${query}`)).toMatchObject(is(400, 'QUERY', detail));
  });

  it('B43 a stale revision, or none', async () => {
    const { id } = await client.script.post<{ id: string }>('/api/v1/campaigns', { name: 'First' });
    const path = `/api/v1/campaigns/${id}`;
    expect((await send('PATCH', path, { name: 'Second' }, { 'If-Match': '"1"' })).status).toBe(200);
    const stale = await send('PATCH', path, { name: 'Third' }, { 'If-Match': '"1"' });
    expect(stale).toMatchObject({ ...is(412, 'CONFLICT'), current: { name: 'Second', revision: 2 } });
    expect(await send('PATCH', path, { name: 'Third' })).toMatchObject(is(428, 'PRECONDITION_REQUIRED'));
  });

  it.each([
    [{ longestStepPx: 900 }, 'recipe.longestStepPx'],
    [{ lagsFrames: [50] }, 'recipe.lagsFrames'],
  ])('B44 the impossible recipe %j', async (recipe, path) => {
    // Row B29 is a stack of four frames with a warning: it is ready.
    const { id } = judged.get('B29')!;
    const answer = await send('POST', `/api/v1/recordings/${id}/analyses`, { recipe });
    expect(answer).toMatchObject(is(422, 'PARAM_RANGE'));
    expect(answer.errors.map((error) => error.path)).toEqual([path]);
    expect(answer.detail).toMatch(/at most \d+/);
  });
});
