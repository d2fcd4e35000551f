import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import type { Role } from '@/lib/access';
import { closeDatabase } from '@/models/database';
import { makeAnalysedRecording } from '../../helpers/analysed-recording';
import { ApiScript } from '../../helpers/api-client';
import { sharedServer } from '../../helpers/server';
import { until } from '../../helpers/until';
import { makeTestLab, type TestLab } from '../../helpers/test-lab';
import {
  expectNoSeriousViolation,
  expectNoSidewaysScroll,
  keepPicture,
  launchBrowser,
  openWindow,
  signIn,
  type Theme,
  WIDTHS,
} from './browser';

const server = sharedServer();
/** Many pages one after the other; a machine may be busy. */
const LONG_MS = 600_000;

/** Pages by the role that uses them; `ID`s stand for what the laboratory has. */
const PAGES: Partial<Record<Role, string[]>> = {
  experimentalist: [
    '/',
    '/campaigns',
    '/campaigns/CAMPAIGN',
    '/campaigns/CAMPAIGN/runs/new',
    '/runs/RUN',
    '/runs/RUN/recordings',
    '/runs/RUN/analyses',
    '/recordings/RECORDING',
    '/recordings/RECORDING/try',
    '/analyses',
    '/analyses/ANALYSIS',
    '/compare',
    '/compare?view=velocities&scale=deviation',
    '/compare?view=courses',
    '/compare?view=profiles',
    '/campaigns/CAMPAIGN/report',
    '/exports',
    '/search?q=run',
    '/account',
    '/nowhere',
  ],
  annotator: ['/review', '/lab/storage', '/analyses/ANALYSIS/edit'],
  lab_administrator: [
    '/',
    '/lab',
    '/lab/tokens',
    '/lab/queue',
    '/lab/storage',
    '/lab/mail',
    '/lab/mail/MAIL',
    '/lab/audit',
  ],
};

const WHERE_NOTHING_IS = [
  '/',
  '/campaigns',
  '/analyses',
  '/review',
  '/compare',
  '/compare?view=velocities',
  '/exports',
  '/search',
  '/rehearsals',
  '/lab/tokens',
];

/** All parts that pages are made of: looked at in the dark theme too. The others are made of the same. */
const IN_BOTH_THEMES = new Set([
  '/',
  '/runs/RUN',
  '/recordings/RECORDING',
  '/analyses/ANALYSIS',
  '/analyses/ANALYSIS/edit',
  '/compare?view=velocities&scale=deviation',
  '/exports',
  '/account',
  '/review',
  '/lab',
  '/lab/queue',
  '/lab/audit',
]);

let browser: Browser;
let full: TestLab;
let empty: TestLab;
let ids: Record<string, string>;

/** A laboratory with an analysis, and one that has nothing, for the tests of a file. */
export function prepareLabs(): void {
  beforeAll(async () => {
    full = await makeTestLab(server.databaseUrl);
    empty = await makeTestLab(server.databaseUrl, 'Bare Cellar Test Laboratory');
    const script = new ApiScript(server.baseUrl, full.people.experimentalist.token);
    const made = await makeAnalysedRecording(script);
    ids = {
      CAMPAIGN: made.campaignId,
      RUN: made.runId,
      RECORDING: made.recordingId,
      ANALYSIS: made.analysisId,
      MAIL: await keptMail(),
    };
    browser = await launchBrowser();
  }, 240_000);

  afterAll(async () => {
    await browser?.close();
    await closeDatabase();
  });
}

/** The news of the analysis, once it has been dealt with. */
async function keptMail(): Promise<string> {
  const script = new ApiScript(server.baseUrl, full.people.lab_administrator.token);
  const list = () => script.json<{ items: { id: string }[] }>('/api/v1/mail?state=kept');
  return (await until(list, ({ items }) => items.length > 0, { withinMs: 30_000 })).items[0].id;
}

const addressOf = (page: string) => page.replace(/[A-Z]{3,}/, (name) => ids[name] ?? name);

async function look(
  lab: TestLab,
  role: Role,
  pages: string[],
  theme: Theme,
  size: keyof typeof WIDTHS,
  name: string,
) {
  const { context, page, complaints } = await openWindow(browser, { theme, size });
  await signIn(page, lab.people[role]);
  for (const path of pages) {
    if (theme === 'dark' && !IN_BOTH_THEMES.has(path)) continue;
    complaints.length = 0;
    await page.goto(addressOf(path), { waitUntil: 'load' });
    await page.getByRole('main').waitFor();
    // Bars stand where something loads; the page is looked at when they are gone.
    await page.waitForFunction(() => document.querySelectorAll('.loading-bars').length === 0, null, {
      timeout: 20_000,
    });
    const file = `${name}-${path.replace(/\W+/g, '-').replace(/^-|-$/g, '') || 'overview'}-${size}-${theme}.png`;
    await keepPicture(page, file);
    await expectNoSidewaysScroll(page);
    // Rules don't depend on the window.
    if (size === 'wide') await expectNoSeriousViolation(page, theme, `${path} in ${theme}`);
    const expected404 = path === '/nowhere' || path === '/lab/storage';
    const unexpected = complaints.filter((text) => !(expected404 && /status of 40[34]/.test(text)));
    expect(unexpected, `${path} in ${theme} at ${size}`).toEqual([]);
  }
  await context.close();
}

/** The pages of each role that uses them. */
export function eachRoleLooks(what: string, theme: Theme, size: keyof typeof WIDTHS): void {
  it.each(Object.keys(PAGES) as Role[])(
    `${what}, for the %s`,
    async (role) => {
      await look(full, role, PAGES[role]!, theme, size, role);
    },
    LONG_MS,
  );
}

/** Every page in one theme: of each role, where there is nothing yet, and before anybody signed in. */
export function everyPage(theme: Theme): void {
  eachRoleLooks('has no serious violation and fits its window', theme, 'wide');

  it(
    'says what to do where there is nothing yet',
    async () => {
      await look(empty, 'principal_investigator', WHERE_NOTHING_IS, theme, 'wide', 'empty');
    },
    LONG_MS,
  );

  it('has no serious violation before anybody signed in', async () => {
    const { context, page } = await openWindow(browser, { theme });
    for (const path of ['/sign-in', '/new-password', '/new-password/closed', '/away']) {
      await page.goto(path);
      await expectNoSeriousViolation(page, theme, `${path} in ${theme}`);
      await keepPicture(page, `${path.slice(1).replace('/', '-')}-${theme}.png`);
    }
    await context.close();
  }, 60_000);
}
