import type { Page } from 'playwright-core';
import { expect, it } from 'vitest';
import type { CorrectionView, MarksView } from '@/lib/views/correction-view';
import { until } from '../../helpers/until';
import { analysisId, analyst, choose, log, people, press, script, stored } from './review-day';

/** What must be in the log once: by whom, what, of which track. */
const expected: { by: string; kind: CorrectionView['kind']; track: number }[] = [];

/** Corrections of three people at once, of whom two lose their link. */
export function theyCorrect(): void {
  it('three annotators correct the same analysis at once', async () => {
    await Promise.all(
      people.map(async (annotator) => {
        const { tracks, person } = annotator;
        await choose(annotator, tracks[0], 4);
        await press(annotator, 's', /^Split track .*: done/);
        expected.push({ by: person.userId, kind: 'split', track: tracks[0].track });
        await choose(annotator, tracks[1], 3);
        await press(annotator, 'f', /^Class track .* free: done/);
        expected.push({ by: person.userId, kind: 'reclass', track: tracks[1].track });
        await press(annotator, '[', /^Cut off track .* before frame .*: done/);
        expected.push({ by: person.userId, kind: 'trim', track: tracks[1].track });
        await stored(annotator);
      }),
    );
    expect(await log()).toHaveLength(9);
    await people[0].page.getByText(/Here too: .*Reyes|Here too: .*Okoro/).waitFor();
  }, 180_000);

  it('what they do while the link is lost is kept and shown, and stored when it is back', async () => {
    const [ada, bo] = people;
    for (const annotator of [ada, bo]) {
      const { tracks, person, context, page } = annotator;
      await context.setOffline(true);
      await choose(annotator, tracks[2], 4);
      await press(annotator, 's', /^Split track .*: done/);
      expected.push({ by: person.userId, kind: 'split', track: tracks[2].track });
      // The later part is a track without a number of the server's; it is worked on all the same.
      await press(annotator, 't', /^Class new track \d trapped: done/);
      await choose(annotator, tracks[3], 2);
      await press(annotator, 'Delete', /^Remove track .*: done/);
      expected.push({ by: person.userId, kind: 'remove', track: tracks[3].track });
      await page.getByText(/No link to the server\. 3 corrections are kept here/).waitFor();
    }
    // Someone else goes on meanwhile, so that both are behind when they come back.
    const cy = people[2];
    await choose(cy, cy.tracks[2], 4);
    await press(cy, 's', /^Split track .*: done/);
    expected.push({ by: cy.person.userId, kind: 'split', track: cy.tracks[2].track });
    await stored(cy);

    // One closes the page without a link: what was done waits in the browser.
    await ada.page.close();
    await Promise.all([ada, bo].map(({ context }) => context.setOffline(false)));
    ada.page = await ada.context.newPage();
    await ada.page.goto(`/analyses/${analysisId}/edit`);
    const now = await until(log, (entries) => entries.length >= 16, { withinMs: 90_000 });
    await Promise.all([stored(ada), stored(bo)]);
    for (const annotator of [ada, bo]) {
      const { person, tracks } = annotator;
      const mine = now.filter(({ by }) => by?.id === person.userId);
      const split = mine.find(({ kind, track }) => kind === 'split' && track === tracks[2].track)!;
      const classed = mine.filter(({ kind, population }) => kind === 'reclass' && population === 'trapped');
      expect(classed.map(({ track }) => track)).toEqual([split.madeTrack]);
      expected.push({ by: person.userId, kind: 'reclass', track: split.madeTrack! });
    }
  }, 240_000);

  it('two who meet in the same place don’t overwrite each other', async () => {
    const [ada, bo] = people;
    const shared = bo.tracks[4];
    await bo.context.setOffline(true);
    await choose(bo, shared, 5);
    await press(bo, 's', /^Split track .*: done/);
    await choose(ada, shared, 3);
    await press(ada, 's', /^Split track .*: done/);
    expected.push({ by: ada.person.userId, kind: 'split', track: shared.track });
    await stored(ada);
    await bo.context.setOffline(false);
    const aside = bo.page.getByRole('region', { name: 'Corrections that were not stored' });
    await aside
      .getByText(/did something to the same place meanwhile: split track/)
      .waitFor({ timeout: 60_000 });
    await aside.getByRole('button', { name: 'Let it go' }).click();
    await stored(bo);
  }, 180_000);

  it('no correction is lost and none doubled', async () => {
    const now = await log();
    const told = now.map(({ by, kind, track }) => ({ by: by!.id, kind, track: track! }));
    const order = (a: (typeof told)[0], b: (typeof told)[0]) =>
      `${a.by} ${a.kind} ${a.track}`.localeCompare(`${b.by} ${b.kind} ${b.track}`);
    expect(told.sort(order)).toEqual(expected.sort(order));
    // And all see the same tracks in the same frame.
    const counts = await Promise.all(
      people.map(async ({ page }) => {
        const slider = page.getByRole('slider', { name: 'Frame' });
        await slider.focus();
        await page.keyboard.press('Home');
        await page.getByText('frame 0 of 48').waitFor();
        return page;
      }),
    );
    const rows = async (page: Page) => Number(await page.getByRole('grid').getAttribute('aria-rowcount'));
    await until(
      () => Promise.all(counts.map(rows)),
      (all) => all[0] > 1 && all.every((count) => count === all[0]),
      { withinMs: 60_000 },
    );
  }, 120_000);

  it('undo takes back, do again puts back', async () => {
    const [, bo] = people;
    const before = (await log()).length;
    await choose(bo, bo.tracks[0], 1);
    await press(bo, 'y', /^Class track .* undecided: done/);
    await stored(bo);
    await press(bo, 'u', /^Taken back: class track/);
    await press(bo, 'r', /^Done again: class track/);
    await press(bo, 'u', /^Taken back: class track/);
    await stored(bo);
    const now = await log();
    expect(now.find(({ revision }) => revision === before + 1)).toMatchObject({
      kind: 'reclass',
      inForce: false,
    });
  }, 120_000);

  it('a line that one marks stands before the other, who takes it away; the frame stays complete', async () => {
    const [ada, bo] = people;
    for (const { page } of [ada, bo]) {
      await page.getByRole('slider', { name: 'Frame' }).focus();
      await page.keyboard.press('Home');
      await page.getByText('frame 0 of 48').waitFor();
      await page.getByRole('application').focus();
    }
    await press(ada, 'k', /^Mark a line: click from its first tracer/);
    await press(ada, 'Enter', /^Point 1: x /);
    await press(ada, 'ArrowRight', /^x /);
    await ada.page.keyboard.press('ArrowRight');
    await press(ada, 'Enter', /^Point 2: x /);
    await press(ada, 'k', /^Mark a line in frame 0: done/);
    await press(ada, 'k', /^No more lines are marked/);
    await press(ada, 'c', /^Frame 0 is complete with one line/);
    await stored(ada);
    await bo.page.getByText('Frame 0: one line, complete.').waitFor({ timeout: 60_000 });
    await bo.page.getByText(`Line 1, 2 px, ${ada.person.name}`).waitFor();
    await bo.page.getByRole('button', { name: 'Remove marked line 1' }).click();
    await bo.page.getByText('Frame 0: no line, complete.').waitFor();
    await stored(bo);
    await ada.page.getByText('Frame 0: no line, complete.').waitFor({ timeout: 60_000 });
    const marks = await script.json<MarksView>(`/api/v1/analyses/${analysisId}/marks`);
    expect(marks.items.map(({ kind, frame, by }) => [kind, frame, by?.id])).toEqual([
      ['complete-frame', 0, ada.person.userId],
    ]);
  }, 180_000);

  it('what was corrected is in the tables, and what the machine made as well', async () => {
    const numbers = async (query: string) => {
      const text = await analyst().text(`/api/v1/analyses/${analysisId}/tracks.csv${query}`);
      return new Set(text.trim().split('\r\n').slice(1).map((line) => Number(line.split(',')[0]))); // prettier-ignore
    };
    const [raw, corrected] = [await numbers('?corrections=none'), await numbers('')];
    const count = (kind: string) => expected.filter((entry) => entry.kind === kind).length;
    expect(corrected.size).toBe(raw.size + count('split') - count('remove'));
    for (const { kind, track } of expected) expect(corrected.has(track)).toBe(kind !== 'remove');
  }, 60_000);
}
