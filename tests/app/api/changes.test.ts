import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import type { CampaignView } from '@/lib/views/campaign-view';
import type { ProblemView } from '@/lib/views/common';
import { models } from '@/models';
import { callJson, call, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab, type LabPerson } from '../../helpers/test-lab';

let database: FreshDatabase;
let person: LabPerson;
let labId: string;
let campaign: string;
let path: string;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  const lab = await makeTestLab(database.url);
  ({ labId } = lab);
  person = lab.people.experimentalist;
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));
beforeEach(async () => {
  const row = await models().Campaign.create({
    id: newId(),
    labId,
    name: 'Before',
    createdBy: person.userId,
  });
  campaign = row.id;
  path = `/api/v1/campaigns/${campaign}`;
});

const patch = (ifMatch: string | undefined, json: unknown) =>
  callJson<CampaignView & ProblemView & { current: CampaignView }>('PATCH', path, {
    token: person.token,
    json,
    headers: ifMatch === undefined ? {} : { 'if-match': ifMatch },
  });

describe('changes by revision', () => {
  it('a change without If-Match answers 428 and changes nothing', async () => {
    const { status, body } = await patch(undefined, { name: 'After' });
    expect([status, body.code]).toEqual([428, 'PRECONDITION_REQUIRED']);
    expect((await models().Campaign.findByPk(campaign))?.name).toBe('Before');
  });

  it('a change from the current revision is stored and raises it', async () => {
    const before = await callJson('GET', path, { token: person.token });
    const { status, body, headers } = await patch(before.headers.get('etag')!, { name: 'After' });
    expect([status, body.name, body.revision, headers.get('etag')]).toEqual([200, 'After', 2, '"2"']);
  });

  it('a stale change answers 412 with what is stored now', async () => {
    await patch('"1"', { name: 'Mine' });
    const { status, body, headers } = await patch('"1"', { name: 'Theirs' });
    expect([status, body.code, body.current.name]).toEqual([412, 'CONFLICT', 'Mine']);
    expect(headers.get('etag')).toBe('"2"');
  });

  it('of twenty changes from one revision at once exactly one is stored', async () => {
    const all = await Promise.all(Array.from({ length: 20 }, (_, i) => patch('"1"', { name: `Try ${i}` })));
    expect(all.filter(({ status }) => status === 200)).toHaveLength(1);
    expect(all.filter(({ status }) => status === 412)).toHaveLength(19);
  });

  it('something in a removed campaign is not made', async () => {
    await callJson('DELETE', path, { token: person.token });
    const { status, body } = await callJson('POST', `${path}/runs`, {
      token: person.token,
      json: { name: 'R' },
    });
    expect([status, body.code]).toEqual([409, 'STATE']);
  });
});

describe('the same POST twice', () => {
  const post = (key: string, json: unknown) =>
    callJson<CampaignView & ProblemView>('POST', '/api/v1/campaigns', {
      token: person.token,
      json,
      headers: { 'idempotency-key': key },
    });

  it('has one effect and one answer', async () => {
    const key = newId();
    const first = await post(key, { name: 'Once' });
    const second = await post(key, { name: 'Once' });
    expect([first.status, second.status]).toEqual([201, 201]);
    expect(second.body.id).toBe(first.body.id);
    expect(second.headers.get('location')).toBe(first.headers.get('location'));
    expect(second.headers.get('idempotency-replayed')).toBe('true');
    expect(await models().Campaign.count({ where: { labId, name: 'Once' } })).toBe(1);
  });

  it('sent ten times at once has one effect', async () => {
    const key = newId();
    const all = await Promise.all(Array.from({ length: 10 }, () => post(key, { name: 'Ten' })));
    expect(all.every(({ status }) => status === 201 || status === 409)).toBe(true);
    expect(await models().Campaign.count({ where: { labId, name: 'Ten' } })).toBe(1);
  });

  it('with another body under the same key answers 409', async () => {
    const key = newId();
    await post(key, { name: 'One' });
    const { status, body } = await post(key, { name: 'Other' });
    expect([status, body.code]).toEqual([409, 'IDEMPOTENCY_CONFLICT']);
  });

  it('after a refusal may be sent again, put right', async () => {
    const key = newId();
    expect((await post(key, { name: '' })).status).toBe(422);
    expect((await post(key, { name: 'Right' })).status).toBe(201);
  });
});

describe('bodies', () => {
  const send = (body: string, type = 'application/json') =>
    call('POST', '/api/v1/campaigns', { token: person.token, body, headers: { 'content-type': type } });
  const problem = async (response: Response) => [
    response.status,
    ((await response.json()) as ProblemView).code,
  ];

  // B41 of the table of bad input.
  it('of 5 MB are refused as too large', async () => {
    expect(await problem(await send(JSON.stringify({ name: 'x'.repeat(5e6) })))).toEqual([413, 'TOO_LARGE']);
  });
  it('nested 100 deep are refused', async () => {
    const deep = '['.repeat(100) + ']'.repeat(100);
    expect(await problem(await send(`{"name":${deep}}`))).toEqual([400, 'BAD_JSON']);
  });
  it('with a key that reaches a prototype are refused', async () => {
    expect(await problem(await send('{"name":"a","__proto__":{"x":1}}'))).toEqual([400, 'BAD_JSON']);
  });
  it('that are no JSON are refused', async () => {
    expect(await problem(await send('{"name":'))).toEqual([400, 'BAD_JSON']);
  });
  it('of plain text are refused', async () => {
    expect(await problem(await send('{"name":"a"}', 'text/plain'))).toEqual([415, 'CONTENT_TYPE']);
  });
  it('with unknown fields are refused by name', async () => {
    const response = await send('{"name":"a","colour":"red"}');
    const body = (await response.json()) as ProblemView;
    expect([response.status, body.errors]).toEqual([
      422,
      [{ path: 'colour', message: "Unknown field 'colour'." }],
    ]);
  });
  // B34: names are text, and stay as they are.
  it('with markup in a name store it as text', async () => {
    const name = '<img src=x onerror=alert(1)> Robert"); DROP TABLE runs;--';
    const { body } = await callJson<CampaignView>('POST', '/api/v1/campaigns', {
      token: person.token,
      json: { name },
    });
    expect(body.name).toBe(name);
  });
  it.each([
    ['x'.repeat(10_000), 'NAME_LENGTH', 'At most 200 characters.'],
    ['zero\u200bwidth', 'NAME_CHARS', 'Hidden or control characters are not accepted in names.'],
    ['right\u202eleft', 'NAME_CHARS', 'Hidden or control characters are not accepted in names.'],
  ])('with the name %.12j are refused', async (name, code, detail) => {
    const { status, body } = await callJson<ProblemView>('POST', '/api/v1/campaigns', {
      token: person.token,
      json: { name },
    });
    expect([status, body.code, body.detail]).toEqual([422, code, detail]);
  });
});
