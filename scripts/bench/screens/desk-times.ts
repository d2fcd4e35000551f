import type { Page } from 'playwright-core';
import { NEXT_CANDIDATE } from '@/components/review/next-candidate-time';
import { newId } from '@/lib/ids';
import type { CandidateFacts } from '@/lib/analysis-facts';
import { models } from '@/models';
import { selectRows } from '@/models/queries/select';
import type { CrowdedAnalysis } from './crowded-analysis';
import type { ScreenTimes } from './editor-times';

const COUNT = 45;
const WARM_UP = 5;
/** A reader looks at a candidate for a while; meanwhile the next ones arrive. */
const LOOK_MS = 700;

interface Pair {
  a: number;
  b: number;
  x: number;
  y: number;
  frame: number;
}

/** Pairs of long tracks as candidates; what is timed doesn't depend on whether they met. */
async function makeCandidates({ analysisId }: CrowdedAnalysis): Promise<void> {
  const analysis = await models().Analysis.findByPk(analysisId);
  const pairs = await selectRows<Pair>(
    `SELECT number AS a, lead(number) OVER (ORDER BY mean_y_px, mean_x_px) AS b, mean_x_px AS x, mean_y_px AS y,
       (first_frame + last_frame) / 2 AS frame
     FROM tracks WHERE analysis_id = $1 AND points > 30 ORDER BY number LIMIT ${COUNT + 1}`,
    [analysisId],
  );
  const side = { points: 8, amplitude: 1.1, amplitudeError: 0.1, exponent: 0.5, exponentError: 0.05 };
  for (const [event, { a, b, x, y, frame }] of pairs.slice(0, COUNT).entries()) {
    const frames = Array.from({ length: 17 }, (_, i) => Math.max(0, frame - 8) + i);
    const tS = frames.map((at) => at * 5e-3);
    const separationM = frames.map((at) => 4e-6 + 3e-5 * Math.sqrt(Math.abs(at - frame) * 5e-3));
    const facts: CandidateFacts = {
      trackA: a,
      trackB: b ?? pairs[0].a,
      t0S: frame * 5e-3,
      t0ErrorS: 1e-3,
      xPx: x,
      yPx: y,
      minSeparationM: 4e-6,
      offsetM: 2e-6,
      before: side,
      after: side,
      reducedChi2: 1,
      bicGain: 31,
      pChance: 0.003,
      qValue: 0.02,
      accepted: true,
      failed: [],
      series: { frame: frames, tS, separationM, errorM: frames.map(() => 1.8e-6), lawM: separationM, flyByM: separationM }, // prettier-ignore
    };
    const { trackA, trackB, t0S, pChance, qValue, accepted } = facts;
    await models().Candidate.create({
      id: newId(),
      labId: analysis!.labId,
      analysisId,
      event,
      trackA,
      trackB,
      t0S,
      pChance,
      qValue,
      accepted,
      facts,
    });
  }
}

/** From the key of a verdict to the painting of the next candidate, on the review desk. */
export async function deskTimes(
  page: Page,
  crowded: CrowdedAnalysis,
  note: (text: string) => void,
): Promise<ScreenTimes> {
  note('Judging candidates');
  await makeCandidates(crowded);
  await page.goto(`/review/${crowded.analysisId}`);
  const heading = page.getByRole('heading', { level: 1 });
  await heading.getByText(/Candidate \d+/).waitFor({ timeout: 120_000 });
  for (let n = 0; n < COUNT - 1; n += 1) {
    await page.waitForTimeout(LOOK_MS);
    await page.keyboard.press('1');
    await page.waitForFunction(
      ([name, count]) => performance.getEntriesByName(String(name)).length >= Number(count),
      [NEXT_CANDIDATE, n + 1] as const,
      { timeout: 60_000 },
    );
  }
  const ms = await page.evaluate(
    (name) => performance.getEntriesByName(name).map(({ duration }) => duration),
    NEXT_CANDIDATE,
  );
  return { name: 'next candidate after a verdict', ms: ms.slice(WARM_UP) };
}
