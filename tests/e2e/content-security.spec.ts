import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase } from '@/models/database';
import { makeAnalysedRecording } from '../helpers/analysed-recording';
import { ApiScript } from '../helpers/api-client';
import { sharedServer } from '../helpers/server';
import { makeTestLab, type TestLab } from '../helpers/test-lab';
import { launchBrowser, openWindow, signIn, type Visit } from './support/browser';

const server = sharedServer();
let browser: Browser;
let visit: Visit;
let lab: TestLab;
let paths: string[];

beforeAll(async () => {
  lab = await makeTestLab(server.databaseUrl);
  const made = await makeAnalysedRecording(new ApiScript(server.baseUrl, lab.people.experimentalist.token));
  paths = [
    '/',
    `/campaigns/${made.campaignId}`,
    `/runs/${made.runId}`,
    `/recordings/${made.recordingId}`,
    `/recordings/${made.recordingId}/try`,
    `/analyses/${made.analysisId}`,
  ];
  browser = await launchBrowser();
  visit = await openWindow(browser);
  await signIn(visit.page, lab.people.experimentalist);
}, 240_000);
afterAll(async () => {
  await browser?.close();
  await closeDatabase();
});

describe('the policy of a page', () => {
  it('hinders nothing of our own: canvas, charts and forms', { timeout: 240_000 }, async () => {
    const { page, complaints } = visit;
    for (const path of paths) {
      await page.goto(path);
      await page.waitForLoadState('networkidle');
      expect([path, complaints]).toEqual([path, []]);
    }
  });

  it(
    'stops a script that somebody got into a page, as element and as attribute',
    { timeout: 120_000 },
    async () => {
      const { page } = visit;
      await page.goto('/');
      const ran = await page.evaluate(async () => {
        const stopped: string[] = [];
        document.addEventListener('securitypolicyviolation', ({ effectiveDirective }) =>
          stopped.push(effectiveDirective),
        );
        const holder = document.createElement('div');
        holder.innerHTML = '<img src="data:," onerror="window.smuggled = true">';
        document.body.append(holder);
        // A parser's script, as markup in a stored name would be one; those that our own code makes are trusted.
        const frame = document.createElement('iframe');
        frame.srcdoc = '<script>parent.smuggled = true</script>';
        document.body.append(frame);
        await new Promise((resolve) => setTimeout(resolve, 1000));
        return { smuggled: 'smuggled' in window, stopped };
      });
      expect(ran.smuggled).toBe(false);
      expect(ran.stopped).toContain('script-src-attr');
    },
  );
});
