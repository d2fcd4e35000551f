import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { acceptInvitation } from '@/app/invitation/[token]/actions';
import { chooseNewPassword } from '@/app/new-password/[token]/actions';
import { requestNewPassword } from '@/app/request-new-password';
import { signInWith } from '@/auth/sign-in';
import { closeDoorbell } from '@/jobs/doorbell';
import { HANDLERS } from '@/jobs/registry';
import { startWorker, type RunningWorker } from '@/jobs/worker';
import { newId } from '@/lib/ids';
import type { ListView, ProblemView } from '@/lib/views/common';
import type { InvitedMemberView, MemberView } from '@/lib/views/lab-view';
import type { MailItemView, MailView } from '@/lib/views/mail-view';
import { models } from '@/models';
import { findAccount } from '@/models/queries/find-account';
import { execute, selectRow } from '@/models/queries/select';
import { call, callJson, webSettings } from '../../helpers/call-route';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeTestLab, type LabPerson, type TestLab } from '../../helpers/test-lab';
import { until } from '../../helpers/until';

const PASSWORD = 'gravel sings at the third bend';
const NEXT_PASSWORD = 'seven lanterns over wet slate';

let database: FreshDatabase;
let lab: TestLab;
let other: TestLab;
let worker: RunningWorker;

beforeAll(async () => {
  webSettings();
  database = await freshDatabase();
  lab = await makeTestLab(database.url, 'First laboratory');
  other = await makeTestLab(database.url, 'Second laboratory');
  worker = await startWorker({
    handlers: HANDLERS,
    say: () => undefined,
    times: { pollMs: 20, sweepMs: 50 },
  });
});
afterAll(({}, suite) => database.dropIfGreen({}, suite));
afterAll(closeDoorbell);
// Hooks run last first: nobody works on a database that is being dropped.
afterAll(() => worker.stop());

const admin = () => lab.people.lab_administrator;

async function mailsTo(email: string, by: LabPerson = admin()): Promise<MailItemView[]> {
  const path = `/api/v1/mail?q=${encodeURIComponent(email)}`;
  return (await callJson<ListView<MailItemView>>('GET', path, { token: by.token })).body.items;
}
const readMail = (id: string, by: LabPerson = admin()) =>
  callJson<MailView & ProblemView>('GET', `/api/v1/mail/${id}`, { token: by.token });
/** The newest mail to somebody, once it has been dealt with. */
async function caught(email: string): Promise<MailView> {
  const [item] = await until(() => mailsTo(email), ([first]) => first?.state === 'kept'); // prettier-ignore
  return (await readMail(item.id)).body;
}
const linkIn = ({ text }: MailView) => /http\S+/.exec(text!)![0];
const secretIn = (mail: MailView) => linkIn(mail).split('/').at(-1)!;

let count = 0;
async function member(labOf = lab): Promise<{ email: string; userId: string; memberId: string }> {
  const email = `member-${++count}@lab.test`;
  const { hashPassword } = await import('@/auth/password');
  const user = await models().User.create({ id: newId(), name: `M ${count}`, email, passwordHash: await hashPassword(PASSWORD) }); // prettier-ignore
  const row = await models().Membership.create({ id: newId(), labId: labOf.labId, userId: user.id, roles: ['analyst'] }); // prettier-ignore
  return { email, userId: user.id, memberId: row.id };
}
const versionOf = async (userId: string) => (await findAccount(userId))!.sessionVersion;

describe('an invitation', () => {
  it('is mailed with a link of its own, which opens the account and closes the one that was shown', async () => {
    const email = 'ada.reed@lab.test';
    const { body } = await callJson<InvitedMemberView>('POST', '/api/v1/people', {
      token: admin().token,
      json: { name: 'Ada Reed', email, roles: ['annotator'] },
    });
    const mail = await caught(email);
    expect(mail).toMatchObject({
      kind: 'invitation',
      recipient: email,
      subject: 'Your invitation to First laboratory',
    });
    expect(mail.text).toContain(admin().name);
    expect(linkIn(mail)).not.toBe(body.invitation!.url);
    const shown = await callJson<MemberView>('GET', `/api/v1/people/${body.id}`, { token: admin().token });
    expect(shown.body.invitationMail).toEqual({ state: 'kept', delayed: false });
    expect(await acceptInvitation(secretIn(mail), PASSWORD)).toEqual({ ok: true });
    expect(await acceptInvitation(body.invitation!.url.split('/').at(-1)!, PASSWORD)).toMatchObject({
      ok: false,
    });
    expect(await signInWith(email, PASSWORD, 'test')).toMatchObject({ ok: true });
  });

  it('made again closes the mailed link before it', async () => {
    const email = 'io.lund@lab.test';
    const { body } = await callJson<InvitedMemberView>('POST', '/api/v1/people', {
      token: admin().token,
      json: { name: 'Io Lund', email, roles: ['annotator'] },
    });
    const first = await caught(email);
    await call('POST', `/api/v1/people/${body.id}/invitation`, { token: admin().token });
    await until(() => mailsTo(email), (all) => all.length === 2 && all[0].state === 'kept'); // prettier-ignore
    expect(await acceptInvitation(secretIn(first), PASSWORD)).toMatchObject({ ok: false });
    expect(await acceptInvitation(secretIn(await caught(email)), PASSWORD)).toEqual({ ok: true });
  });

  it('of somebody who has an account is told by mail without a link that opens anything', async () => {
    const { email } = other.people.annotator;
    await callJson('POST', '/api/v1/people', {
      token: admin().token,
      json: { name: 'x', email, roles: ['analyst'] },
    });
    const mail = await caught(email);
    expect(mail.kind).toBe('membership');
    expect(mail.text).not.toMatch(/\/(invitation|new-password)\//);
  });
});

describe('a new password', () => {
  it('is chosen once by the mailed link; sessions of before have ended, and the person is told', async () => {
    const { email, userId } = await member();
    const before = await versionOf(userId);
    expect(await requestNewPassword(email.toUpperCase(), '10.0.0.1')).toEqual({ ok: true });
    const mail = await caught(email);
    expect(mail.kind).toBe('password-reset');
    expect(await versionOf(userId)).toBe(before);
    const secret = secretIn(mail);
    const both = await Promise.all([
      chooseNewPassword(secret, NEXT_PASSWORD),
      chooseNewPassword(secret, `${NEXT_PASSWORD}s`),
    ]);
    expect(both.filter(({ ok }) => ok)).toHaveLength(1);
    expect(await chooseNewPassword(secret, NEXT_PASSWORD)).toMatchObject({
      ok: false,
      detail: expect.stringContaining('used already'),
    });
    expect(await versionOf(userId)).toBe(before + 1);
    expect(await signInWith(email, PASSWORD, 'test')).toMatchObject({ ok: false });
    await until(() => mailsTo(email), ([first]) => first.kind === 'password-changed' && first.state === 'kept'); // prettier-ignore
  });

  it('must be a good one, and a bad one does not use the link up', async () => {
    const { email } = await member();
    await requestNewPassword(email, '10.0.0.2');
    const secret = secretIn(await caught(email));
    expect(await chooseNewPassword(secret, 'passwordpassword1')).toMatchObject({ ok: false });
    expect(await chooseNewPassword(secret, NEXT_PASSWORD)).toEqual({ ok: true });
  });

  it('is answered alike, in words and in time, whether or not there is such an account', async () => {
    const { email } = await member();
    const asked: Record<string, number[]> = { known: [], unknown: [] };
    for (let i = 0; i < 3; i++) {
      for (const [kind, address] of [
        ['known', email],
        ['unknown', `nobody-${i}@lab.test`],
      ]) {
        // prettier-ignore
        const began = performance.now();
        expect(await requestNewPassword(address, `10.1.0.${i}`)).toEqual({ ok: true });
        asked[kind].push(performance.now() - began);
      }
    }
    const least = (times: number[]) => Math.min(...times);
    // The pause covers the work of either way: what is left is the noise of timers.
    expect(Math.abs(least(asked.known) - least(asked.unknown))).toBeLessThan(100);
    expect(least(asked.unknown)).toBeGreaterThanOrEqual(490);
  });

  it('is mailed at most three times an hour to one account, which the answer does not tell', async () => {
    const { email } = await member();
    for (let i = 0; i < 5; i++) expect(await requestNewPassword(email, `10.2.0.${i}`)).toEqual({ ok: true });
    expect(await mailsTo(email)).toHaveLength(3);
  });

  it('is not asked for without end from one address of the net', async () => {
    for (let i = 0; i < 10; i++) await requestNewPassword(`n${i}@lab.test`, '10.3.0.1');
    expect(await requestNewPassword('n@lab.test', '10.3.0.1')).toMatchObject({
      ok: false,
      detail: expect.stringMatching(/^Too many requests from here\. Wait \d+ min\.$/),
    });
  });

  it.each([
    ['closed', `UPDATE users SET disabled_at = now() WHERE id = $1`],
    ['without a password yet', `UPDATE users SET password_hash = NULL WHERE id = $1`],
    ['without a laboratory', `DELETE FROM memberships WHERE user_id = $1`],
  ])('is mailed to no account %s', async (_, sql) => {
    // prettier-ignore
    const { email, userId } = await member();
    await execute(sql, [userId]);
    expect(await requestNewPassword(email, '10.4.0.1')).toEqual({ ok: true });
    const row = await selectRow<{ n: number }>('SELECT count(*)::int AS n FROM mails WHERE user_id = $1', [
      userId,
    ]);
    expect(row!.n).toBe(0);
  });

  it('is started for a member by the administrator, who never learns or sets it', async () => {
    const { email, memberId, userId } = await member();
    const path = `/api/v1/people/${memberId}/password-reset`;
    expect((await call('POST', path, { token: admin().token })).status).toBe(204);
    const mail = await caught(email);
    expect(mail.text).toContain(admin().name);
    expect(await chooseNewPassword(secretIn(mail), NEXT_PASSWORD)).toEqual({ ok: true });
    const entry = await models().AuditEntry.findOne({ where: { subjectId: memberId } });
    expect(entry).toMatchObject({ action: 'member.reset-started', userId: admin().userId });
    await execute('UPDATE users SET password_hash = NULL WHERE id = $1', [userId]);
    const early = await callJson<ProblemView>('POST', path, { token: admin().token });
    expect([early.status, early.body.code]).toEqual([409, 'STATE']);
  });
});

describe('sessions of a member', () => {
  it('are ended by the administrator, and it is written down', async () => {
    const { memberId, userId } = await member();
    const before = await versionOf(userId);
    const path = `/api/v1/people/${memberId}/sessions-end`;
    expect((await call('POST', path, { token: admin().token })).status).toBe(204);
    expect(await versionOf(userId)).toBe(before + 1);
    const entry = await models().AuditEntry.findOne({ where: { subjectId: memberId } });
    expect(entry).toMatchObject({ action: 'member.sessions-ended', userId: admin().userId });
  });
});

describe('the mail of a laboratory', () => {
  it('is read by its administrator alone; reading what another person got is written down', async () => {
    const { email } = await member();
    await requestNewPassword(email, '10.5.0.1');
    const { id } = await caught(email);
    expect((await readMail(id, lab.people.principal_investigator)).status).toBe(403);
    expect((await readMail(id, other.people.lab_administrator)).status).toBe(404);
    expect(await mailsTo(email, other.people.lab_administrator)).toEqual([]);
    const entries = await models().AuditEntry.findAll({ where: { subjectId: id } });
    expect(entries.map(({ action, userId }) => [action, userId])).toContainEqual([
      'mail.read',
      admin().userId,
    ]);
  });

  it('never shows what concerns an account that another laboratory shares', async () => {
    const { email, userId } = await member();
    await models().Membership.create({ id: newId(), labId: other.labId, userId, roles: ['analyst'] });
    await requestNewPassword(email, '10.6.0.1');
    const found = await until(
      () =>
        selectRow<{ id: string; lab_id: string }>(
          `SELECT id, lab_id FROM mails WHERE user_id = $1 AND state = 'kept'`,
          [userId],
        ),
      (row) => row !== null,
    );
    for (const { people } of [lab, other]) {
      expect(await mailsTo(email, people.lab_administrator)).toEqual([]);
      expect((await readMail(found!.id, people.lab_administrator)).status).toBe(404);
    }
  });

  it('hides the link of a mail once its person belongs to another laboratory too', async () => {
    const { email, userId } = await member();
    await requestNewPassword(email, '10.7.0.1');
    const mail = await caught(email);
    expect(mail.text).toContain('/new-password/');
    await models().Membership.create({ id: newId(), labId: other.labId, userId, roles: ['analyst'] });
    expect((await readMail(mail.id)).body).toMatchObject({ text: null, html: null });
  });
});
