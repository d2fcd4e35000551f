import { readFileSync } from 'node:fs';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newId } from '@/lib/ids';
import { models } from '@/models';
import { closeDatabase } from '@/models/database';
import { ApiScript } from '../helpers/api-client';
import { makeRecording } from '../helpers/lab-rows';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import { until } from '../helpers/until';
import { launchBrowser, openWindow, signIn, type Visit } from './support/browser';

const server = sharedServer();
const PASSWORD = 'gravel sings at the third bend';

let browser: Browser;
let visit: Visit;
let invited: Visit;
let lab: TestLab;
let link: string;

beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  browser = await launchBrowser();
  visit = await openWindow(browser);
  invited = await openWindow(browser);
  await signIn(visit.page, lab.people.lab_administrator);
}, 120_000);
afterAll(async () => {
  await browser?.close();
  await closeDatabase();
});

/** Reads the newest mail to a person on the administrator's pages. @returns the link in it */
async function linkOfMailTo(name: string, subject: string): Promise<string> {
  const { page } = visit;
  await page.goto('/lab/mail');
  const row = page.getByRole('row').filter({ hasText: name }).filter({ hasText: subject });
  await row.first().getByText('kept here').waitFor({ timeout: 30_000 });
  await row.first().getByRole('link').click();
  const words = page.getByRole('document', { name: 'Words of the mail' });
  await words.waitFor();
  return /http\S+/.exec((await words.textContent())!)![0];
}

const rowOf = (name: string) => visit.page.getByRole('row').filter({ hasText: name });

/** From an invitation to a farewell; each step leads to the next. */
describe('a lab administrator looks after the people', () => {
  it('invites a person and is shown the link once', async () => {
    const { page } = visit;
    await page.goto('/lab');
    await page.getByRole('button', { name: 'Invite', exact: true }).click();
    const dialog = page.getByRole('dialog');
    await dialog.getByLabel('Name').fill('Ada Reed');
    await dialog.getByLabel('E-mail').fill('not an address');
    await dialog.getByLabel('Annotator').check();
    await dialog.getByRole('button', { name: 'Invite', exact: true }).click();
    await dialog.getByText('This is not an e-mail address.').waitFor();
    await dialog.getByLabel('E-mail').fill(`ada-${lab.labId}@lab.test`);
    await dialog.getByRole('button', { name: 'Invite', exact: true }).click();
    const shown = dialog.getByTestId('invitation-link');
    await shown.waitFor();
    link = (await shown.textContent())!;
    expect(new URL(link).origin).toBe(server.baseUrl);
    await dialog.getByRole('button', { name: 'I have kept it' }).click();
    await rowOf('Ada Reed')
      .getByText(/invited, link ends/)
      .waitFor();
    await page.reload();
    await rowOf('Ada Reed').waitFor();
    expect(await page.getByText(link).count()).toBe(0);
  });

  it('makes a new link, after which the one before opens nothing; the mail that was caught has one too', async () => {
    const { page } = visit;
    await rowOf('Ada Reed').getByRole('button', { name: 'New link' }).click();
    await page.getByRole('button', { name: 'Make a new link' }).click();
    await page.getByRole('button', { name: 'I have kept it' }).click();
    await invited.page.goto(link);
    await invited.page.getByText('This invitation is not open').first().waitFor();
    const mailed = await linkOfMailTo('Ada Reed', 'Your invitation to');
    await page.goto('/lab');
    await invited.page.goto(mailed);
    await invited.page.getByRole('textbox', { name: 'Password' }).fill(PASSWORD);
    await invited.page.getByRole('button', { name: 'Choose it and sign in' }).click();
    await invited.page.waitForURL((url) => url.pathname === '/');
  });

  it('changes the roles, which ends the session of before', async () => {
    const { page } = visit;
    await page.reload();
    await rowOf('Ada Reed').getByRole('button', { name: 'Change roles' }).click();
    await page.getByRole('dialog').getByLabel('Analyst').check();
    await page.getByRole('button', { name: 'Save roles' }).click();
    await rowOf('Ada Reed').getByRole('cell', { name: 'Annotator, Analyst' }).waitFor();
    await invited.page.goto('/lab/audit');
    await invited.page.waitForURL((url) => url.pathname === '/sign-in');
  });

  it('removes the person, who can’t come in any more', async () => {
    const { page } = visit;
    await rowOf('Ada Reed').getByRole('button', { name: 'Remove' }).click();
    await page.getByRole('button', { name: 'Remove them' }).click();
    await rowOf('Ada Reed').waitFor({ state: 'detached' });
    await invited.page.goto(link);
    await invited.page.getByText('This invitation is not open').first().waitFor();
  });

  it('reads all of it in the audit trail, newest first, and chooses what to see', async () => {
    const { page } = visit;
    await page.getByRole('link', { name: 'Audit trail' }).click();
    const table = page.getByRole('table', { name: 'Audit trail' });
    await table.getByText('removed from the laboratory').waitFor();
    const rows = await table.getByRole('row').allTextContents();
    const words = [
      'removed from',
      'changed the roles of',
      'read a mail to',
      'a new invitation for',
      'added to the laboratory',
    ];
    for (const [i, text] of words.entries()) expect(rows[i + 1]).toContain(text);
    expect(rows[1]).toContain(lab.people.lab_administrator.name);
    await page.getByLabel('What was done').selectOption('Tokens');
    await page.getByText('Nothing of this kind has been written down.').waitFor();
    await page.getByLabel('What was done').selectOption('Everything');
    await table.waitFor();
    await page.getByLabel('By whom').selectOption(lab.people.analyst.name);
    await page.getByText('Nothing of this kind has been written down.').waitFor();
    await page.getByLabel('By whom').selectOption('Everybody');
    // The next choice is made before this one has arrived and must not undo it.
    await page.getByLabel('Search the audit trail').fill('new invitation');
    // The table gives way to bars while the choice is asked for.
    await until(
      () => table.getByRole('row').count(),
      (rows) => rows === 2,
      { withinMs: 20_000 },
    );
    const [file] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('link', { name: 'Export CSV' }).click(),
    ]);
    expect(file.suggestedFilename()).toMatch(/-audit\.csv$/);
    const lines = readFileSync(await file.path(), 'utf8')
      .trim()
      .split('\r\n');
    expect(lines).toHaveLength(2);
    expect(lines[1]).toContain('member.invited-again');
    // Of the address that was none.
    expect(visit.complaints).toEqual([expect.stringContaining('422')]);
  });
});

describe('a lab administrator looks after accounts, files and work', () => {
  it('ends the sessions of a member, who signs in again', async () => {
    const { page } = visit;
    const { analyst } = lab.people;
    await signIn(invited.page, analyst);
    await page.goto('/lab');
    await rowOf(analyst.name).getByRole('button', { name: 'Account' }).click();
    // Where they are signed in stands there, and nothing is left of it afterwards.
    const sessions = page.getByRole('table', { name: 'Sessions' });
    await sessions.getByText('Chromium on Linux').first().waitFor();
    await page.getByRole('button', { name: 'End their sessions' }).click();
    await page.getByText('Every session has ended.').waitFor();
    await page.getByText('Not signed in anywhere.').waitFor();
    await page.getByRole('button', { name: 'Close' }).click();
    await invited.page.goto('/account');
    await invited.page.waitForURL((url) => url.pathname === '/sign-in');
  });

  it('revokes the token of a member, whose scripts are refused from then on', async () => {
    const { page } = visit;
    const { experimentalist } = lab.people;
    const ask = () => new ApiScript(server.baseUrl, experimentalist.token).request('/api/v1/me');
    expect((await ask()).status).toBe(200);
    await page.goto('/lab/tokens');
    await rowOf(experimentalist.name).getByRole('button', { name: 'Revoke' }).click();
    await page.getByRole('button', { name: 'Revoke it' }).click();
    await rowOf(experimentalist.name).getByText('revoked').waitFor();
    expect((await ask()).status).toBe(401);
    await page.goto('/lab/audit');
    await page
      .getByRole('table', { name: 'Audit trail' })
      .getByText(/revoked/)
      .first()
      .waitFor();
  });

  it('finds the mail with which a person who forgot their password chooses a new one', async () => {
    const { page } = invited;
    const { analyst } = lab.people;
    await page.goto('/sign-in');
    await page.getByRole('link', { name: 'Have a link sent' }).click();
    // The page before has a field of the same name.
    await page.waitForURL((url) => url.pathname === '/new-password');
    await page.getByLabel('E-mail').fill(analyst.email);
    await page.getByRole('button', { name: 'Send me a link' }).click();
    await page.getByText('has an account here, a mail with a link is on its way').waitFor();
    const link = await linkOfMailTo(analyst.name, 'Choose a new password');
    await page.goto(link);
    await page.getByRole('textbox', { name: 'Password' }).fill(PASSWORD);
    await page.getByRole('button', { name: 'Choose it and sign in' }).click();
    await page.waitForURL((url) => url.pathname === '/');
    await page.goto(link);
    await page.getByText('This link is not open').first().waitFor();
    expect(invited.complaints).toEqual([]);
  });

  it('which does without a notice on the account page, and finds that kept', async () => {
    const { page } = invited;
    await page.goto('/account');
    const choice = page.getByLabel('An analysis that I started is done');
    await choice.uncheck();
    await page.getByText('Your choice is kept.').waitFor();
    await page.reload();
    expect(await choice.isChecked()).toBe(false);
  });

  it('has stored files checked, and is told of one that is missing', async () => {
    const { page } = visit;
    const { labId } = lab;
    const { userId } = lab.people.experimentalist;
    const campaign = await models().Campaign.create({ id: newId(), labId, name: 'C', createdBy: userId });
    await makeRecording(
      { labId, userId, campaignId: campaign.id },
      { name: 'lost.tif', sha256: '0'.repeat(64) },
    );
    await page.goto('/lab/storage');
    await page.getByText('1 recording not looked at yet').waitFor();
    await page.getByRole('button', { name: 'Check now' }).click();
    await rowOf('lost.tif').getByText('A stored file is not there.').waitFor({ timeout: 30_000 });
    await page.getByText('1 recording is not as it was sent.').waitFor();
    await page.goto('/');
    await page.getByText('1 stored stack is damaged').waitFor();
    await page.goto('/lab/mail');
    await rowOf('Stored files damaged').getByText('kept here').waitFor({ timeout: 30_000 });
  });

  it('runs failed work again and sees it done', async () => {
    const { page } = visit;
    const row = await models().JobRun.findOne({ where: { labId: lab.labId, kind: 'check-files' } });
    await row!.update({
      state: 'failed',
      errorCode: 'FAULT',
      errorDetail: 'Failed 3 times: the disk was away.',
    });
    await page.goto('/lab/queue?state=failed');
    await page.getByText('the disk was away').waitFor();
    await page.getByRole('button', { name: 'Run again' }).click();
    await page.getByText('No work has failed.').waitFor();
    await page.goto('/lab/queue');
    await rowOf('check stored files').getByText('done').waitFor({ timeout: 30_000 });
    await page
      .getByRole('cell', { name: /\d s ago$/ })
      .first()
      .waitFor();
  });
});
