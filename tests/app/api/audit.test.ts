import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { signInWith } from '@/auth/sign-in';
import { ROLES } from '@/lib/access';
import { AUDIT_WORDS } from '@/lib/audit-words';
import type { ListView, ProblemView } from '@/lib/views/common';
import type { AuditView, InvitedMemberView } from '@/lib/views/lab-view';
import { call, callJson, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab, type LabPerson, type TestLab } from '../../helpers/test-lab';

let database: FreshDatabase;
let lab: TestLab;
let other: TestLab;
let campaignId: string;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url, 'First laboratory');
  other = await makeTestLab(database.url, 'Second laboratory');
  const { experimentalist, lab_administrator: admin, analyst } = lab.people;
  const campaign = await post<{ id: string }>('/campaigns', experimentalist, { name: 'Quiet pipe' });
  campaignId = campaign.id;
  await post(`/campaigns/${campaignId}/runs`, experimentalist, { name: 'Slow' });
  await call('DELETE', `/api/v1/campaigns/${campaignId}`, { token: experimentalist.token });
  await call('POST', `/api/v1/campaigns/${campaignId}/restore`, { token: experimentalist.token });
  await post('/tokens', analyst, { name: 'Notebook' });
  const person = { name: 'Ada Reed', email: 'ada@lab.test', roles: ['annotator'] };
  const member = await post<InvitedMemberView>('/people', admin, person);
  await callJson('PATCH', `/api/v1/people/${member.id}`, {
    token: admin.token,
    json: { roles: ['analyst'] },
    headers: { 'if-match': '"1"' },
  });
  await call('DELETE', `/api/v1/people/${member.id}`, { token: admin.token });
  await post('/tokens', other.people.analyst, { name: 'Theirs' });
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));

async function post<T>(path: string, { token }: LabPerson, json: object): Promise<T> {
  const { status, body } = await callJson<T>('POST', `/api/v1${path}`, { token, json });
  expect(status).toBe(201);
  return body;
}

const read = async (person: LabPerson, query = '') =>
  (await callJson<ListView<AuditView>>('GET', `/api/v1/audit${query}`, { token: person.token })).body;

describe('the audit trail', () => {
  it('shows the principal investigator and the administrator all of their laboratory, newest first', async () => {
    for (const role of ['principal_investigator', 'lab_administrator'] as const) {
      const { items } = await read(lab.people[role]);
      expect(items.map(({ action, person, subject }) => [action, person?.name, subject.name])).toEqual([
        ['member.removed', lab.people.lab_administrator.name, 'Ada Reed'],
        ['member.roles-changed', lab.people.lab_administrator.name, 'Ada Reed'],
        ['member.invited', lab.people.lab_administrator.name, 'Ada Reed'],
        ['token.made', lab.people.analyst.name, 'Notebook'],
        ['campaign.restored', lab.people.experimentalist.name, 'Quiet pipe'],
        ['campaign.removed', lab.people.experimentalist.name, 'Quiet pipe'],
        ['run.made', lab.people.experimentalist.name, 'Slow'],
        ['campaign.made', lab.people.experimentalist.name, 'Quiet pipe'],
      ]);
      expect(items[1].detail).toEqual({ name: 'Ada Reed', before: ['annotator'], after: ['analyst'] });
    }
  });

  it('shows everybody else what they did themselves, whatever they ask for', async () => {
    const { experimentalist, analyst, annotator } = lab.people;
    const actions = async (person: LabPerson, query = '') =>
      (await read(person, query)).items.map(({ action }) => action);
    expect(await actions(experimentalist)).toEqual([
      'campaign.restored',
      'campaign.removed',
      'run.made',
      'campaign.made',
    ]);
    expect(await actions(analyst)).toEqual(['token.made']);
    expect(await actions(annotator)).toEqual([]);
    expect(await actions(annotator, `?person=${experimentalist.userId}`)).toEqual([]);
  });

  it('never shows what was done in another laboratory', async () => {
    const { items } = await read(other.people.lab_administrator);
    expect(items.map(({ subject }) => subject.name)).toEqual(['Theirs']);
    expect(
      (await read(other.people.lab_administrator, `?person=${lab.people.analyst.userId}`)).items,
    ).toEqual([]);
  });

  it('is filtered by person, by kind of thing and by act', async () => {
    const { principal_investigator: pi, experimentalist, lab_administrator: admin } = lab.people;
    const actions = async (query: string) => (await read(pi, query)).items.map(({ action }) => action);
    expect(await actions(`?person=${experimentalist.userId}`)).toEqual([
      'campaign.restored',
      'campaign.removed',
      'run.made',
      'campaign.made',
    ]);
    expect(await actions('?action=member')).toEqual([
      'member.removed',
      'member.roles-changed',
      'member.invited',
    ]);
    expect(await actions('?action=member.invited')).toEqual(['member.invited']);
    expect(await actions(`?action=campaign&person=${admin.userId}`)).toEqual([]);
    expect(await actions('?action=mem')).toEqual([]);
  });

  it('tells of failed sign-ins of members, to those who see all, with where they came from', async () => {
    const { annotator, lab_administrator: admin, analyst } = lab.people;
    await signInWith(annotator.email, 'not the password', '192.0.2.77');
    await signInWith('nobody@lab.test', 'not the password', '192.0.2.78');
    const { items } = await read(admin, '?action=sign-in');
    expect(items.map(({ action, person, detail }) => [action, person?.name, detail])).toEqual([
      ['sign-in.failed', annotator.name, { why: 'refused', address: '192.0.2.77' }],
    ]);
    expect((await read(analyst, '?action=sign-in')).items).toEqual([]);
    expect((await read(other.people.lab_administrator, '?action=sign-in')).items).toEqual([]);
  });

  it('tells of tries beyond the limit too, so that guessing shows', async () => {
    const { annotator, lab_administrator: admin } = lab.people;
    for (let i = 0; i < 6; i++) await signInWith(annotator.email, 'guess', `192.0.2.${100 + i}`);
    const { items } = await read(admin, '?action=sign-in.failed');
    expect(items.map(({ detail }) => detail.why)).toContain('too-many');
  });

  it('is read page by page, each entry once', async () => {
    const seen: string[] = [];
    for (let cursor: string | null = ''; cursor !== null;) {
      const page: ListView<AuditView> = await read(
        lab.people.lab_administrator,
        `?limit=2${cursor ? `&cursor=${cursor}` : ''}`,
      );
      expect(page.items.length).toBeLessThanOrEqual(2);
      seen.push(...page.items.map(({ id }) => id));
      cursor = page.nextCursor;
    }
    const whole = (await read(lab.people.lab_administrator)).items.map(({ id }) => id);
    expect(seen).toEqual(whole);
  });

  it.each(['?action=a%25', '?action=RUN', '?person=me', '?sort=action'])('%s is refused', async (query) => {
    const { token } = lab.people.lab_administrator;
    const { status, body } = await callJson<ProblemView>('GET', `/api/v1/audit${query}`, { token });
    expect([status, body.code]).toEqual([400, 'QUERY']);
  });

  it('has words for each act that these people did, and every role may open it', async () => {
    for (const { action } of (await read(lab.people.lab_administrator)).items)
      expect([action, AUDIT_WORDS[action]]).toEqual([action, expect.stringMatching(/^[a-z]/)]);
    for (const role of ROLES) {
      const { status } = await callJson('GET', '/api/v1/audit', { token: lab.people[role].token });
      expect([role, status]).toEqual([role, 200]);
    }
  });
});
