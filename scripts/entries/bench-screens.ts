import { mkdtemp, rm } from 'node:fs/promises';
import { cpus, loadavg, tmpdir } from 'node:os';
import { join } from 'node:path';
import { chromium } from 'playwright-core';
import { codeVersion } from '@/lib/env';
import { closeDatabase } from '@/models/database';
import { quantileOf } from '@/scripts/bench/screens/browser-times';
import { makeCrowdedAnalysis } from '@/scripts/bench/screens/crowded-analysis';
import { deskTimes } from '@/scripts/bench/screens/desk-times';
import { editorTimes, type ScreenTimes } from '@/scripts/bench/screens/editor-times';
import { startOwnProduct } from '@/scripts/bench/screens/own-product';
import { figure, textTable } from '@/scripts/bench/text-table';

// How long screens take to answer a key or a click, measured by the browser itself with more than
// 5,000 tracks in sight: from the event to the end of the drawing that shows what it did.

const say = (text: string) => process.stdout.write(`${text}\n`);
const note = (text: string) => process.stderr.write(`${text}\n`);
const root = process.env.BEADLINE_ROOT ?? process.cwd();
const folder = await mkdtemp(join(tmpdir(), 'beadline-bench-screens-'));

function timesTable(times: readonly ScreenTimes[]): string {
  return textTable([
    ['ms', 'median', '95th percentile', 'longest', 'times'],
    ...times.map(({ name, ms }) => [
      name,
      figure(quantileOf(ms, 0.5)),
      figure(quantileOf(ms, 0.95)),
      figure(Math.max(...ms)),
      String(ms.length),
    ]),
  ]);
}

try {
  // The database's own user has to reach its folder in here.
  await import('node:fs/promises').then(({ chmod }) => chmod(folder, 0o711));
  note('Starting a product of its own');
  const product = await startOwnProduct(root, folder);
  process.env.DATABASE_URL = product.databaseUrl;
  process.env.BEADLINE_DATA = product.dataDir;
  try {
    note('Making a recording with 5,600 tracers in sight');
    const crowded = await makeCrowdedAnalysis();
    const asRoot = process.getuid?.() === 0;
    const browser = await chromium.launch({
      executablePath: process.env.BEADLINE_CHROMIUM ?? '/usr/bin/chromium',
      headless: true,
      args: [...(asRoot ? ['--no-sandbox', '--disable-dev-shm-usage'] : []), '--no-first-run'],
    });
    try {
      const context = await browser.newContext({
        baseURL: product.baseUrl,
        viewport: { width: 1440, height: 900 },
      });
      const page = await context.newPage();
      await page.goto('/sign-in');
      await page.getByLabel('E-mail').fill(crowded.email);
      await page.getByLabel('Password').fill(crowded.password);
      await page.getByRole('button', { name: 'Sign in' }).click();
      await page.waitForURL((url) => url.pathname === '/');
      // The desk first: the editor leaves splits behind, after which results are measured again.
      const desk = await deskTimes(page, crowded, note);
      const { times, tracks } = await editorTimes(page, crowded, note);
      say(
        `Beadline ${codeVersion()}, Chromium ${browser.version()}, ${cpus().length} x ${cpus()[0]?.model}, load ${loadavg()[0].toFixed(1)}`,
      );
      say(
        `\nTrack editor, ${tracks} tracks in the block, picture of ${crowded.widthPx} x ${crowded.heightPx} px\n`,
      );
      say(timesTable([...times, desk]));
    } finally {
      await browser.close();
    }
  } finally {
    await closeDatabase();
    await product.stop();
  }
} finally {
  await rm(folder, { recursive: true, force: true });
}
