import { mkdtempSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { closeDoorbell } from '@/jobs/doorbell';
import { dropKeptMail } from '@/jobs/mail/keep-mail';
import { HANDLERS } from '@/jobs/registry';
import { askForAccountMail, askForMail, mailPauseMs, sendMailJob } from '@/jobs/send-mail';
import { giveUpAnalysis, tellOfAnalysis } from '@/jobs/tell-of-analysis';
import { startWorker, type RunningWorker } from '@/jobs/worker';
import { newId } from '@/lib/ids';
import { hashLinkSecret } from '@/lib/link-secret';
import type { MailOrder } from '@/lib/mail/mail-kinds';
import { models } from '@/models';
import { findLinkOwner } from '@/models/queries/account-links';
import { addMember } from '@/models/queries/invite-member';
import { dropOldMails } from '@/models/queries/mails';
import { execute, selectRow, selectRows } from '@/models/queries/select';
import { freshDatabase, type FreshDatabase } from '../helpers/fresh-database';
import { makeAnalysis, makeLab, makeRecording, makeRun, type LabRows } from '../helpers/lab-rows';
import { headersOf, startSmtpListener, type SmtpListener } from '../helpers/smtp-listener';
import { until } from '../helpers/until';

const FAST = { pollMs: 20, sweepMs: 50, heartbeatMs: 500, lookMs: 100 };
const SITE = 'https://beadline.lab.test';

let db: FreshDatabase;
let lab: LabRows;
let folder: string;
let smtp: SmtpListener | null = null;
const workers: RunningWorker[] = [];

beforeAll(async () => {
  db = await freshDatabase();
});
beforeEach(async () => {
  folder = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'mail-'));
  process.env.BEADLINE_DATA = folder;
  lab = await makeLab();
});
afterEach(async () => {
  await stopWorkers();
  await smtp?.close();
  smtp = null;
  delete process.env.BEADLINE_SMTP_URL;
  delete process.env.BEADLINE_MAIL_FROM;
  await execute(`UPDATE job_runs SET state = 'stopped' WHERE state IN ('waiting', 'running')`);
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(closeDoorbell);

const stopWorkers = () => Promise.all(workers.splice(0).map((worker) => worker.stop()));
const work = async () => {
  workers.push(await startWorker({ handlers: HANDLERS, say: () => undefined, times: FAST }));
};
async function useSmtp(): Promise<SmtpListener> {
  smtp = await startSmtpListener();
  process.env.BEADLINE_SMTP_URL = smtp.url;
  process.env.BEADLINE_MAIL_FROM = 'Test lab <sender@beadline.test>';
  return smtp;
}

const ask = (order: MailOrder, { labId, userId } = lab) =>
  db.sequelize.transaction((transaction) => askForMail({ labId, userId, order, site: SITE }, transaction));
const askAccount = (userId: string) =>
  db.sequelize.transaction((transaction) =>
    askForAccountMail({ userId, order: { kind: 'password-reset', byName: null }, site: SITE }, transaction),
  );
const givePassword = (userId: string) =>
  execute(`UPDATE users SET password_hash = 'x' WHERE id = $1`, [userId]);

interface MailRow {
  id: string;
  lab_id: string;
  state: string;
  kind: string;
  recipient: string | null;
  subject: string | null;
  body_text: string | null;
  body_html: string | null;
  personal: boolean;
}
const mailsOf = ({ userId } = lab) =>
  selectRows<MailRow>('SELECT * FROM mails WHERE user_id = $1 ORDER BY created_at', [userId]);
const mailIn = (state: string, who = lab) =>
  until(
    () => mailsOf(who),
    (rows) => rows.some((row) => row.state === state),
  ).then((rows) => rows.find((row) => row.state === state)!);
const jobOf = (mailId: string) =>
  selectRow<{ state: string; attempt: number; waits_s: number; error_detail: string | null }>(
    `SELECT state, attempt, error_detail, extract(epoch FROM not_before - updated_at)::float8 AS waits_s
     FROM job_runs WHERE subject_id = $1`,
    [mailId],
  );
const failed = { kind: 'analysis-failed', analysisId: newId(), recordingName: 'a.tif', runName: 'Run', detail: 'No.' } as const; // prettier-ignore

describe('without a mail server', () => {
  it('a mail is kept for the administrator: in the table, and as a file that only the product may read', async () => {
    await ask(failed);
    await work();
    const mail = await mailIn('kept');
    expect(mail.recipient).toBe(`${lab.userId}@lab.test`);
    expect(mail.body_text).toContain('a.tif');
    expect(mail.body_html).toContain(`${SITE}/analyses/${failed.analysisId}`);
    const path = join(folder, 'mail', `${mail.id}.eml`);
    expect(statSync(path).mode & 0o777).toBe(0o600);
    const raw = readFileSync(path, 'utf8');
    expect(headersOf(raw)).toMatchObject({
      to: `Test Person <${lab.userId}@lab.test>`,
      subject: 'Analysis failed: a.tif',
      'auto-submitted': 'auto-generated',
    });
    expect(raw).toContain('Content-Type: text/plain');
    expect(raw).toContain('Content-Type: text/html');
    expect(readdirSync(join(folder, 'mail'))).toEqual([`${mail.id}.eml`]);
  });

  it('is forgotten after its days, table and file alike, but never while it waits', async () => {
    await ask(failed);
    await work();
    const { id } = await mailIn('kept');
    await stopWorkers();
    await ask(failed);
    const days = (count: number) => new Date(Date.now() + count * 86_400_000);
    expect(await dropKeptMail(90, days(89))).toBe(0);
    expect(await dropKeptMail(90, days(91))).toBe(1);
    expect(readdirSync(join(folder, 'mail'))).toEqual([]);
    await dropOldMails(90);
    expect(await mailsOf()).toHaveLength(2);
    await execute(`UPDATE mails SET created_at = now() - interval '91 days' WHERE user_id = $1`, [
      lab.userId,
    ]);
    await dropOldMails(90);
    const left = await mailsOf();
    expect([left.length, left[0].state, left[0].id === id]).toEqual([1, 'waiting', false]);
  });

  it('is sent only if what it tells of becomes true', async () => {
    const undone = db.sequelize.transaction(async (transaction) => {
      await askForMail({ labId: lab.labId, userId: lab.userId, order: failed }, transaction);
      throw new Error('taken back');
    });
    await expect(undone).rejects.toThrow('taken back');
    expect(await mailsOf()).toEqual([]);
  });
});

describe('with a mail server', () => {
  it('a mail goes to one recipient, in plain text and HTML, and its words are kept nowhere', async () => {
    const server = await useSmtp();
    await ask(failed);
    await work();
    const row = await mailIn('sent');
    expect(server.received).toHaveLength(1);
    const [mail] = server.received;
    expect([mail.from, mail.to]).toEqual(['sender@beadline.test', [`${lab.userId}@lab.test`]]);
    expect(headersOf(mail.raw)).toMatchObject({
      from: 'Test lab <sender@beadline.test>',
      'message-id': `<${row.id}@beadline.test>`,
      'content-type': expect.stringContaining('multipart/alternative'),
    });
    expect([row.body_text, row.body_html]).toEqual([null, null]);
    expect(readdirSync(folder)).not.toContain('mail');
  });

  it('names with line ends add no header and no recipient, wherever they stand', async () => {
    const server = await useSmtp();
    const evil = 'A\r\nBcc: all@evil.test\r\n\r\nForged body\u2028.';
    await execute('UPDATE users SET name = $2 WHERE id = $1', [lab.userId, evil]);
    await execute('UPDATE labs SET name = $2 WHERE id = $1', [lab.labId, evil]);
    await ask({ ...failed, recordingName: evil, runName: evil, detail: evil });
    await work();
    await mailIn('sent');
    const [{ raw, to }] = server.received;
    expect(to).toEqual([`${lab.userId}@lab.test`]);
    expect(Object.keys(headersOf(raw)).sort()).toEqual(
      [
        'auto-submitted',
        'content-type',
        'date',
        'from',
        'message-id',
        'mime-version',
        'subject',
        'to',
      ].sort(),
    );
    expect(raw.slice(0, raw.indexOf('\r\n\r\n'))).not.toMatch(/^(Bcc:|Forged)/im);
    expect(raw.split('\r\n\r\n')[1]).toMatch(/^--/);
  });

  it('an address that is more than one goes nowhere, and is not tried again', async () => {
    const server = await useSmtp();
    await execute(`UPDATE users SET email = 'a@lab.test,b@evil.test' WHERE id = $1`, [lab.userId]);
    await ask(failed);
    await work();
    const mail = await mailIn('failed');
    expect(await jobOf(mail.id)).toMatchObject({ state: 'failed', attempt: 1 });
    expect(server.received).toEqual([]);
  });

  it('one that is away, busy or dies on the way is tried again after half a minute', async () => {
    const server = await useSmtp();
    await server.close();
    await ask(failed);
    await work();
    const [mail] = await mailsOf();
    const waits = await until(() => jobOf(mail.id), (job) => job?.error_detail !== null); // prettier-ignore
    expect(waits).toMatchObject({ state: 'waiting', attempt: 1, waits_s: 30 });
    expect(waits!.error_detail).toMatch(/^The mail server could not take it: .*ECONNREFUSED/);
    // Back again, but short of room, then dead in the middle of the text, then well.
    smtp = await startSmtpListener(server.port);
    const trouble = [['RCPT', '451 Come back later'], ['END', 'hang-up']]; // prettier-ignore
    let answers = 0;
    smtp.script((verb) => (verb === trouble[answers]?.[0] ? trouble[answers++][1] : null));
    for (const attempt of [2, 3]) {
      await execute('UPDATE job_runs SET not_before = now() WHERE subject_id = $1', [mail.id]);
      await until(() => jobOf(mail.id), (job) => job?.attempt === attempt && job.state === 'waiting'); // prettier-ignore
    }
    await execute('UPDATE job_runs SET not_before = now() WHERE subject_id = $1', [mail.id]);
    await mailIn('sent');
    expect(smtp.received).toHaveLength(1);
  });

  it('one that refuses this mail for good is believed', async () => {
    const server = await useSmtp();
    server.script((verb) => (verb === 'RCPT' ? '550 No such person here' : null));
    await ask(failed);
    await work();
    const mail = await mailIn('failed');
    const job = await jobOf(mail.id);
    expect(job).toMatchObject({ state: 'failed', attempt: 1 });
    expect(job!.error_detail).toBe('The mail server refused it: 550 No such person here');
  });

  it('a refused password of ours is no refusal of the mail', async () => {
    const server = await useSmtp();
    process.env.BEADLINE_SMTP_URL = server.url.replace('//', '//user:wrong@');
    server.script((verb) =>
      verb === 'EHLO' ? '250-catcher.test\r\n250 AUTH PLAIN' : verb === 'AUTH' ? '535 Wrong' : null,
    );
    await ask(failed);
    await work();
    const [mail] = await mailsOf();
    const job = await until(() => jobOf(mail.id), (found) => found?.error_detail !== null); // prettier-ignore
    expect(job).toMatchObject({ state: 'waiting', attempt: 1 });
    expect(job!.error_detail).not.toContain('wrong');
  });
});

describe('tries', () => {
  it('go on for 24 hours with growing pauses of at most one hour', () => {
    const pauses = Array.from({ length: sendMailJob.maxAttempts - 1 }, (_, i) => mailPauseMs(i + 1));
    expect(pauses.slice(0, 8).map((ms) => ms / 60_000)).toEqual([0.5, 1, 2, 4, 8, 16, 32, 60]);
    expect(Math.max(...pauses)).toBe(3_600_000);
    const hours = pauses.reduce((sum, ms) => sum + ms, 0) / 3_600_000;
    expect(hours >= 24 && hours < 25).toBe(true);
  });
});

describe('links', () => {
  const linkIn = (mail: MailRow) => /\/(invitation|new-password)\/([\w-]{43})\b/.exec(mail.body_text!)![2];

  it('get their secret when the mail is sent: nothing in the database opens an account before', async () => {
    await givePassword(lab.userId);
    await askAccount(lab.userId);
    expect(await selectRows('SELECT * FROM account_links WHERE user_id = $1', [lab.userId])).toEqual([]);
    await work();
    const secret = linkIn(await mailIn('kept'));
    const owner = await findLinkOwner(hashLinkSecret(secret), 'password-reset');
    expect(owner?.userId).toBe(lab.userId);
    const [{ hours }] = await selectRows<{ hours: number }>(
      'SELECT extract(epoch FROM expires_at - now())::float8 / 3600 AS hours FROM account_links WHERE user_id = $1',
      [lab.userId],
    );
    expect(hours > 0.95 && hours <= 1).toBe(true);
  });

  it('for a new password open nothing after their hour, nor once a newer one was sent', async () => {
    await givePassword(lab.userId);
    await askAccount(lab.userId);
    await work();
    const first = linkIn(await mailIn('kept'));
    await askAccount(lab.userId);
    const rows = await until(() => mailsOf(), (all) => all.filter(({ state }) => state === 'kept').length === 2); // prettier-ignore
    const second = linkIn(rows[1]);
    expect(await findLinkOwner(hashLinkSecret(first), 'password-reset')).toBeNull();
    expect(await findLinkOwner(hashLinkSecret(second), 'password-reset')).not.toBeNull();
    expect(await findLinkOwner(hashLinkSecret(second), 'invitation')).toBeNull();
    await execute(`UPDATE account_links SET expires_at = now() - interval '1 second'`);
    expect(await findLinkOwner(hashLinkSecret(second), 'password-reset')).toBeNull();
  });

  it('of an invitation are other secrets than the one shown, and end with it', async () => {
    const secret = hashLinkSecret(newId());
    const invitation = { hash: secret, expiresAt: new Date(Date.now() + 3_600_000) };
    const person = { name: 'Ada', email: `${newId()}@lab.test`, roles: ['annotator' as const] };
    const { member } = await addMember(lab.labId, person, invitation, lab.userId, ({ userId }, transaction) =>
      askForMail(
        { labId: lab.labId, userId, order: { kind: 'invitation', byName: 'Io' }, site: SITE },
        transaction,
      ),
    );
    await work();
    const mail = await mailIn('kept', { ...lab, userId: member.person.id });
    const mailed = hashLinkSecret(linkIn(mail));
    expect(mailed.equals(secret)).toBe(false);
    for (const hash of [mailed, secret]) expect(await findLinkOwner(hash, 'invitation')).not.toBeNull();
    await execute('UPDATE users SET invitation_expires_at = now() WHERE id = $1', [member.person.id]);
    for (const hash of [mailed, secret]) expect(await findLinkOwner(hash, 'invitation')).toBeNull();
  });
});

describe('notices', () => {
  const told = () => mailsOf().then((rows) => rows.map(({ kind, state, lab_id }) => [kind, state, lab_id]));

  async function analysis(fields: object = {}) {
    const run = await makeRun(lab, { name: 'Run 7' });
    const recording = await makeRecording(lab, { runId: run.id, name: 'night.tif' });
    return makeAnalysis(lab, { recordingId: recording.id, createdBy: lab.userId, ...fields });
  }

  it('tell whoever started an analysis that it is done, or why it failed', async () => {
    const [good, bad] = [await analysis(), await analysis()];
    await db.sequelize.transaction((t) => tellOfAnalysis(good.id, { kind: 'analysis-done' }, t));
    await db.sequelize.transaction((t) => giveUpAnalysis(bad.id, { code: 'FAULT', detail: 'Page 17 cannot be read.' }, t)); // prettier-ignore
    await work();
    const rows = await until(() => mailsOf(), (all) => all.every(({ state }) => state === 'kept')); // prettier-ignore
    expect(rows.map(({ subject }) => subject)).toEqual([
      'Analysis done: night.tif',
      'Analysis failed: night.tif',
    ]);
    expect(rows[1].body_text).toContain('Page 17 cannot be read.');
    expect(rows[1].body_text!.replace(/\s+/g, ' ')).toContain('run Run 7');
    expect(await models().Analysis.findByPk(bad.id)).toMatchObject({ state: 'failed' });
  });

  it('of an analysis that nobody started go to nobody', async () => {
    const { id } = await analysis({ createdBy: null });
    await db.sequelize.transaction((t) => tellOfAnalysis(id, { kind: 'analysis-done' }, t));
    expect(await told()).toEqual([]);
  });

  it('are dropped for a member who does without them, and who has left the laboratory', async () => {
    await execute(`UPDATE memberships SET notices_off = '{analysis-done}' WHERE user_id = $1`, [lab.userId]);
    await ask({ kind: 'analysis-done', analysisId: newId(), recordingName: 'a', runName: 'r' });
    await work();
    await mailIn('dropped');
    await ask(failed);
    await mailIn('kept');
    await stopWorkers();
    await ask(failed);
    await execute('DELETE FROM memberships WHERE user_id = $1', [lab.userId]);
    await work();
    await until(() => told(), (rows) => rows.filter(([, state]) => state === 'dropped').length === 2); // prettier-ignore
  });
});

describe('mail about an account of several laboratories', () => {
  it('is shown to none of them', async () => {
    const other = await makeLab('Other laboratory');
    await models().Membership.create({
      id: newId(),
      labId: other.labId,
      userId: lab.userId,
      roles: ['analyst'],
    });
    await givePassword(lab.userId);
    await askAccount(lab.userId);
    expect((await mailsOf())[0]).toMatchObject({ personal: true });
  });

  it('goes to nobody who is a member of none', async () => {
    await execute('DELETE FROM memberships WHERE user_id = $1', [lab.userId]);
    await askAccount(lab.userId);
    expect(await mailsOf()).toEqual([]);
  });
});
