import type { Page } from 'playwright-core';
import type { CrowdedAnalysis } from './crowded-analysis';
import { takeSeen, timeUntilDrawn, watchPage } from './browser-times';

/** Times of one thing that a person does, ms. */
export interface ScreenTimes {
  name: string;
  ms: number[];
}

interface Box {
  x: number;
  y: number;
  width: number;
  height: number;
}

const ROUNDS = 60;
const WARM_UP = 8;

/** Times of the track editor with all tracks of a crowded analysis in sight. */
export async function editorTimes(
  page: Page,
  { analysisId }: CrowdedAnalysis,
  note: (text: string) => void,
): Promise<{ times: ScreenTimes[]; tracks: number }> {
  await page.goto(`/analyses/${analysisId}/edit?frame=30`);
  const well = page.getByRole('application');
  await well.waitFor();
  // Rows stand there once tracks and the first picture do.
  await page.getByRole('grid').getByRole('row').nth(5).waitFor({ timeout: 120_000 });
  await watchPage(page);
  await well.focus();
  // The first track that can be chosen tells that pictures and tracks are there.
  let tracks = 0;
  await timeUntilDrawn(
    page,
    (drawing) => {
      tracks = Math.max(tracks, drawing.tracks);
      return drawing.chosen !== null && drawing.tracks > 1000;
    },
    () => page.keyboard.press('.'),
  );

  note('Picking by pointer');
  const pick: number[] = [];
  const box = (await well.boundingBox())!;
  for (let n = 0; n < ROUNDS + WARM_UP; n += 1) {
    const place = placeIn(box, n);
    await page.mouse.move(place.x, place.y);
    await page.keyboard.press('Escape');
    const before = await chosenNow(page);
    pick.push(
      await timeUntilDrawn(
        page,
        ({ chosen }) => chosen !== null && chosen !== before,
        () => page.mouse.click(place.x, place.y),
      ),
    );
  }

  note('Scrubbing');
  const scrub: number[] = [];
  await well.focus();
  for (let n = 0; n < ROUNDS + WARM_UP; n += 1) {
    const frame = 30 + ((n % 30) - 15 < 0 ? n % 30 : 30 - (n % 30));
    const next = 30 + (((n + 1) % 30) - 15 < 0 ? (n + 1) % 30 : 30 - ((n + 1) % 30));
    scrub.push(
      await timeUntilDrawn(
        page,
        (drawing) => drawing.frame === next,
        () => page.keyboard.press(next > frame ? 'ArrowRight' : 'ArrowLeft'),
      ),
    );
  }

  note('Splitting');
  const split: number[] = [];
  let version = 0;
  for (let n = 0; n < ROUNDS + WARM_UP; n += 1) {
    // Another place each time: parts of tracks that were split can't be split again in this frame.
    const place = placeIn(box, n + ROUNDS + WARM_UP);
    await page.keyboard.press('Escape');
    await page.mouse.click(place.x, place.y);
    version = Math.max(version, await versionAtRest(page));
    const began = await splitOnce(page, version);
    if (began !== null) split.push(began);
  }

  note('Moving the picture');
  const frames = await panFrames(page, box);
  return {
    tracks,
    times: [
      { name: 'pick a track by pointer', ms: pick.slice(WARM_UP) },
      { name: 'one frame on or back', ms: scrub.slice(WARM_UP) },
      { name: 'split a track', ms: split.slice(WARM_UP) },
      { name: 'drawing all tracks, once', ms: frames.drawing },
      { name: 'from one drawing to the next while the mouse drags', ms: frames.between },
    ],
  };
}

/** The n-th of places that spread evenly over the middle of the picture. */
const placeIn = (box: Box, n: number) => ({
  x: box.x + box.width * (0.25 + 0.5 * ((n * 0.618) % 1)),
  y: box.y + box.height * (0.25 + 0.5 * ((n * 0.414) % 1)),
});

/** Waits until nothing was drawn for a while, as after an answer of the server. @returns the last version drawn */
async function versionAtRest(page: Page): Promise<number> {
  for (let version = 0; ;) {
    await page.waitForTimeout(120);
    const { drawings } = await takeSeen(page);
    if (drawings.length === 0) return version;
    version = Math.max(version, ...drawings.map((drawing) => drawing.version));
  }
}

const chosenNow = (page: Page): Promise<number | null> =>
  takeSeen(page).then(({ drawings }) => drawings.at(-1)?.chosen ?? null);

/** Null where the track can't be split in this frame, which is said at once and draws nothing. */
async function splitOnce(page: Page, version: number): Promise<number | null> {
  try {
    return await Promise.race([
      timeUntilDrawn(
        page,
        (drawing) => drawing.version > version,
        () => page.keyboard.press('s'),
      ),
      page
        .getByText(/split it at a frame|can't be split/)
        .waitFor({ timeout: 3_000 })
        .then(() => null),
    ]);
  } catch {
    return null;
  }
}

async function panFrames(page: Page, box: Box) {
  const middle = { x: box.x + box.width / 2, y: box.y + box.height / 2 };
  await page.mouse.move(middle.x, middle.y);
  await page.keyboard.press('+');
  await page.waitForTimeout(500);
  await takeSeen(page);
  await page.mouse.down();
  for (let n = 0; n < 120; n += 1) {
    await page.mouse.move(middle.x + 60 * Math.sin(n / 12), middle.y + 40 * Math.cos(n / 9));
  }
  await page.mouse.up();
  await page.waitForTimeout(200);
  const { drawings } = await takeSeen(page);
  return {
    drawing: drawings.map(({ tookMs }) => tookMs),
    between: drawings.slice(1).map(({ endMs }, i) => endMs - drawings[i].endMs),
  };
}
