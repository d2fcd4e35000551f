import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { acceptInvitation } from '@/app/invitation/[token]/actions';
import { INVITATION_MS } from '@/auth/invitations';
import { closeDoorbell } from '@/jobs/doorbell';
import type { ProblemView } from '@/lib/views/common';
import type { InvitationView, InvitedMemberView, MemberView } from '@/lib/views/lab-view';
import { models } from '@/models';
import { findAccount } from '@/models/queries/find-account';
import { call, callJson, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';

const PASSWORD = 'gravel sings at the third bend';

let database: FreshDatabase;
let lab: TestLab;
let other: TestLab;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url, 'First laboratory');
  other = await makeTestLab(database.url, 'Second laboratory');
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));
afterAll(closeDoorbell);

const admin = () => lab.people.lab_administrator;
let count = 0;
const newEmail = () => `person-${++count}@lab.test`;

const invite = (json: object, token = admin().token) =>
  callJson<InvitedMemberView & ProblemView>('POST', '/api/v1/people', { token, json });
const remove = (id: string, token = admin().token) => call('DELETE', `/api/v1/people/${id}`, { token });
const secretOf = (invitation: InvitationView | null) => invitation!.url.split('/').at(-1)!;

async function memberOf(userId: string): Promise<string> {
  return (await models().Membership.findOne({ where: { userId, labId: lab.labId } }))!.id;
}

const auditOf = (subjectId: string) =>
  models().AuditEntry.findAll({ where: { subjectId, labId: lab.labId }, order: [['createdAt', 'ASC']] });

describe('an invitation', () => {
  it('makes account and membership, and its link opens the account once', async () => {
    const email = newEmail();
    const { status, body, headers } = await invite({
      name: 'Ada Reed',
      email,
      roles: ['annotator', 'analyst'],
    });
    expect(status).toBe(201);
    expect(headers.get('location')).toBe(`/api/v1/people/${body.id}`);
    expect(body).toMatchObject({ person: { name: 'Ada Reed', email }, roles: ['annotator', 'analyst'] });
    expect(body.invitedUntil).toBe(body.invitation!.expiresAt);
    const days = (Date.parse(body.invitation!.expiresAt) - Date.now()) / INVITATION_MS;
    expect(days > 0.99 && days <= 1).toBe(true);

    expect(await acceptInvitation(secretOf(body.invitation), PASSWORD)).toEqual({ ok: true });
    expect(await acceptInvitation(secretOf(body.invitation), PASSWORD)).toMatchObject({ ok: false });
    const now = await callJson<MemberView>('GET', `/api/v1/people/${body.id}`, { token: admin().token });
    expect(now.body.invitedUntil).toBeNull();
    expect(now.body).not.toHaveProperty('invitation');
  });

  it('is in the answer only: the database keeps its hash, the audit trail who did it', async () => {
    const email = newEmail();
    const { body } = await invite({ name: 'B', email, roles: ['analyst'] });
    const stored = await models().User.findByPk(body.person.id);
    expect(stored!.invitationHash).toHaveLength(32);
    expect(JSON.stringify(stored)).not.toContain(secretOf(body.invitation));
    const [entry] = await auditOf(body.id);
    expect(entry).toMatchObject({
      userId: admin().userId,
      action: 'member.invited',
      detail: { email, roles: ['analyst'] },
    });
    expect(JSON.stringify(entry)).not.toContain(secretOf(body.invitation));
  });

  it('of somebody with a password elsewhere makes them a member at once, without a link', async () => {
    const { email, userId, name } = other.people.analyst;
    const { status, body } = await invite({
      name: 'As they call me',
      email: email.toUpperCase(),
      roles: ['analyst'],
    });
    expect([status, body.invitation, body.person.id, body.person.name]).toEqual([201, null, userId, name]);
    expect((await findAccount(userId))!.labs.map(({ id }) => id).sort()).toEqual(
      [lab.labId, other.labId].sort(),
    );
  });

  it('never opens an account that another laboratory has invited', async () => {
    const email = newEmail();
    const first = await invite(
      { name: 'C', email, roles: ['analyst'] },
      other.people.lab_administrator.token,
    );
    const second = await invite({ name: 'C', email, roles: ['analyst'] });
    expect([second.status, second.body.invitation]).toEqual([201, null]);
    const again = await callJson<ProblemView>('POST', `/api/v1/people/${second.body.id}/invitation`, {
      token: admin().token,
    });
    expect([again.status, again.body.code]).toEqual([409, 'STATE']);
    expect(await acceptInvitation(secretOf(first.body.invitation), PASSWORD)).toEqual({ ok: true });
  });

  it('is refused for a member, and for fields that can’t be right, which it names', async () => {
    const twice = await invite({ name: 'D', email: lab.people.annotator.email, roles: ['analyst'] });
    expect([twice.status, twice.body.detail]).toEqual([409, expect.stringMatching(/is a member .* already/)]);
    const bad = await invite({ name: ' ', email: 'no e-mail', roles: [] });
    expect([bad.status, bad.body.errors.map(({ path }) => path)]).toEqual([422, ['name', 'email', 'roles']]);
  });

  it('two at once for the same person make one member', async () => {
    const person = { name: 'E', email: newEmail(), roles: ['analyst'] };
    const answers = await Promise.all([invite(person), invite(person)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([201, 409]);
    expect(await models().User.count({ where: { email: person.email } })).toBe(1);
  });

  it('made again closes the link before it, and is not made for somebody who can sign in', async () => {
    const { body } = await invite({ name: 'F', email: newEmail(), roles: ['analyst'] });
    const again = () =>
      callJson<InvitationView & ProblemView>('POST', `/api/v1/people/${body.id}/invitation`, {
        token: admin().token,
      });
    const second = await again();
    expect(second.status).toBe(201);
    expect(await acceptInvitation(secretOf(body.invitation), PASSWORD)).toMatchObject({ ok: false });
    expect(await acceptInvitation(secretOf(second.body), PASSWORD)).toEqual({ ok: true });
    expect((await again()).status).toBe(409);
    const actions = (await auditOf(body.id)).map(({ action }) => action);
    expect(actions).toEqual(['member.invited', 'member.invited-again']);
  });
});

describe('removing a member', () => {
  it('ends their sessions and tokens here, keeps what they made, and is written down', async () => {
    const { userId, token, email, name } = lab.people.experimentalist;
    const campaign = await callJson<{ id: string }>('POST', '/api/v1/campaigns', {
      token,
      json: { name: 'Kept' },
    });
    const before = await findAccount(userId);
    const id = await memberOf(userId);
    expect((await remove(id)).status).toBe(204);
    expect((await call('GET', '/api/v1/me', { token })).status).toBe(401);
    const after = await findAccount(userId);
    expect([after!.sessionVersion, after!.labs]).toEqual([before!.sessionVersion + 1, []]);
    expect(await models().ApiToken.count({ where: { userId, revokedAt: null } })).toBe(0);
    const kept = await call('GET', `/api/v1/campaigns/${campaign.body.id}`, { token: admin().token });
    expect(kept.status).toBe(200);
    expect((await auditOf(id)).at(-1)).toMatchObject({
      action: 'member.removed',
      userId: admin().userId,
      detail: { name, email, roles: ['experimentalist'] },
    });
    expect((await remove(id)).status).toBe(404);
  });

  it('leaves their membership and tokens of another laboratory alone', async () => {
    const { userId, token, email } = other.people.annotator;
    const { body } = await invite({ name: 'x', email, roles: ['annotator'] });
    expect((await remove(body.id)).status).toBe(204);
    expect((await call('GET', '/api/v1/me', { token })).status).toBe(200);
    expect((await findAccount(userId))!.labs.map(({ id }) => id)).toEqual([other.labId]);
  });

  it('closes the invitation of somebody who has not come yet', async () => {
    const { body } = await invite({ name: 'G', email: newEmail(), roles: ['analyst'] });
    expect((await remove(body.id)).status).toBe(204);
    expect(await acceptInvitation(secretOf(body.invitation), PASSWORD)).toMatchObject({ ok: false });
  });

  it('is never oneself, and two administrators who remove each other leave one', async () => {
    const { userId, token } = admin();
    const own = await memberOf(userId);
    const self = await remove(own);
    expect([self.status, await self.text()]).toEqual([
      403,
      expect.stringMatching(/Nobody removes themselves/),
    ]);

    const { userId: secondId, token: secondToken } = lab.people.principal_investigator;
    const second = await memberOf(secondId);
    await models().Membership.update({ roles: ['lab_administrator'] }, { where: { id: second } });
    const answers = await Promise.all([remove(second, token), remove(own, secondToken)]);
    const done = answers.filter(({ status }) => status === 204);
    expect(done).toHaveLength(1);
    const left = await models().Membership.findAll({ where: { labId: lab.labId } });
    expect(left.filter(({ roles }) => roles.includes('lab_administrator'))).toHaveLength(1);
  });
});
