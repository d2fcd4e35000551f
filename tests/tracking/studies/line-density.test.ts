import { expect, test, vi } from 'vitest';
import { lineDensityTrials, tracksOfRecording } from '@/tracking/studies/line-density';
import { lineDensityCase } from '@/tracking/studies/line-density-cases';

// Whole tangles are measured; `npm run validate -- line-density` runs a hundred of every case.
vi.setConfig({ testTimeout: 120_000 });

const SEED = 1;
/** A standard normal stays within so many deviations 999 times in 1,000. */
const DEVIATIONS = 3.3;

// Scatter of ln L over the tangles of the study.
test.each([
  ['captures', 'free-path', 0.3],
  ['free decay', 'decay', 0.3],
])('with %s, true tracks give the line density by %s', (name, method, scatter) => {
  const trial = lineDensityTrials(lineDensityCase(name), [SEED]).find((one) => one.method === method)!;
  expect(trial.ratio, trial.note).not.toBeNull();
  expect(Math.abs(Math.log(trial.ratio!))).toBeLessThan(DEVIATIONS * scatter);
  expect(trial.statistical).toBeGreaterThan(0);
});

test('a tangle that is rendered, searched and linked gives its line density by each method whose assumptions hold', () => {
  const one = lineDensityCase('lines 0.32 mm apart');
  const trials = lineDensityTrials(one, [SEED], (scene, seed) => tracksOfRecording(scene, seed));
  for (const method of one.holds) {
    const { ratio, note } = trials.find((trial) => trial.method === method)!;
    expect(ratio, `${method}: ${note}`).not.toBeNull();
    expect(Math.abs(Math.log(ratio!)), method).toBeLessThan(DEVIATIONS * 0.12);
  }
});
