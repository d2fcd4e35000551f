import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase } from '@/models/database';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
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

  it('makes a new link, after which only that one opens the account', async () => {
    const { page } = visit;
    await rowOf('Ada Reed').getByRole('button', { name: 'New link' }).click();
    await page.getByRole('button', { name: 'Make a new link' }).click();
    const second = (await page.getByTestId('invitation-link').textContent())!;
    await page.getByRole('button', { name: 'I have kept it' }).click();
    await invited.page.goto(link);
    await invited.page.getByText('This invitation is not open').first().waitFor();
    await invited.page.goto(second);
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
    await rowOf('Ada Reed').getByText('Annotator, Analyst').waitFor();
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
    const words = ['removed from', 'changed the roles of', 'a new invitation for', 'added to the laboratory'];
    for (const [i, text] of words.entries()) expect(rows[i + 1]).toContain(text);
    expect(rows[1]).toContain(lab.people.lab_administrator.name);
    await page.getByLabel('What was done').selectOption('Tokens');
    await page.getByText('Nothing of this kind has been written down.').waitFor();
    await page.getByLabel('What was done').selectOption('Everything');
    await table.waitFor();
    await page.getByLabel('By whom').selectOption(lab.people.analyst.name);
    await page.getByText('Nothing of this kind has been written down.').waitFor();
    // Of the address that was none.
    expect(visit.complaints).toEqual([expect.stringContaining('422')]);
  });
});
