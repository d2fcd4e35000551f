import { expect, test, vi } from 'vitest';
import { lineDensityTrials } from '@/tracking/studies/line-density';
import { lineDensityCase } from '@/tracking/studies/line-density-cases';

// A whole tangle is measured for each broken assumption.
vi.setConfig({ testTimeout: 120_000 });

test.each(['lines across the flow', 'one population', 'curved lines', 'thick sheet', 'few decorated lines'])(
  'with %s every method that takes the contrary for granted declines or says so',
  (name) => {
    const one = lineDensityCase(name);
    const trials = lineDensityTrials(one, [1]);
    for (const method of one.broken!.methods) {
      const trial = trials.find((of) => of.method === method)!;
      expect(trial.ratio === null || one.broken!.says.test(trial.note), `${method}: ${trial.note}`).toBe(
        true,
      );
    }
  },
);
