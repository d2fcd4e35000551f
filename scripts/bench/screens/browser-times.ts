import type { Page } from 'playwright-core';
import { DRAW_MEASURE, type Drawn } from '@/components/editor/draw-times';

/** A drawing of the tracks: when it ended, ms of the page's clock, how long it took, and what it showed. */
export interface Drawing extends Drawn {
  endMs: number;
  tookMs: number;
}

/**
 * Keeps, in the page, when keys and buttons went down and when the tracks were drawn. Times are those
 * that the browser gives to the events themselves, so that nothing of this program is measured.
 */
export async function watchPage(page: Page): Promise<void> {
  await page.evaluate((name) => {
    const seen = { inputs: [] as number[], drawings: [] as unknown[] };
    (window as unknown as { benchSeen: typeof seen }).benchSeen = seen;
    for (const kind of ['keydown', 'pointerdown', 'pointermove'] as const) {
      window.addEventListener(kind, (event) => seen.inputs.push(event.timeStamp), { capture: true });
    }
    new PerformanceObserver((list) => {
      for (const entry of list.getEntriesByName(name)) {
        const { startTime, duration, detail } = entry as PerformanceMeasure;
        seen.drawings.push({ endMs: startTime + duration, tookMs: duration, ...(detail as object) });
      }
    }).observe({ entryTypes: ['measure'] });
  }, DRAW_MEASURE);
}

/** Inputs and drawings since the last call. */
export function takeSeen(page: Page): Promise<{ inputs: number[]; drawings: Drawing[] }> {
  return page.evaluate(() => {
    const { benchSeen } = window as unknown as { benchSeen: { inputs: number[]; drawings: Drawing[] } };
    const taken = { inputs: benchSeen.inputs, drawings: benchSeen.drawings };
    benchSeen.inputs = [];
    benchSeen.drawings = [];
    return taken;
  });
}

/** Waits until a drawing shows what is asked for. @returns ms from the last input before it to its end */
export async function timeUntilDrawn(
  page: Page,
  shows: (drawing: Drawing) => boolean,
  act: () => Promise<void>,
): Promise<number> {
  await takeSeen(page);
  await act();
  const inputs: number[] = [];
  const drawings: Drawing[] = [];
  const end = Date.now() + 30_000;
  while (Date.now() < end) {
    const seen = await takeSeen(page);
    inputs.push(...seen.inputs);
    drawings.push(...seen.drawings);
    // What was drawn before the act began is an answer to something else.
    const drawn = drawings.find((drawing) => drawing.endMs > inputs[0] && shows(drawing));
    if (drawn) return drawn.endMs - inputs[0];
    await page.waitForTimeout(20);
  }
  throw new Error('What was done was never drawn.');
}

/** Type-7 quantile. */
export function quantileOf(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  const at = (sorted.length - 1) * share;
  const low = Math.floor(at);
  const high = Math.min(sorted.length - 1, low + 1);
  return sorted[low] + (sorted[high] - sorted[low]) * (at - low);
}
