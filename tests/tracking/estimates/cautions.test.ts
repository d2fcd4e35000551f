import { expect, test, vi } from 'vitest';
import { concernedBy, lineDensityTrials } from '@/tracking/studies/line-density';

// A whole tangle is measured for each broken assumption.
vi.setConfig({ testTimeout: 120_000 });

test.each(['lines across the flow', 'one population'] as const)(
  'with %s every method that takes the contrary for granted declines or says so',
  (broken) => {
    const trials = lineDensityTrials(1e7, [1], 0.15, broken);
    for (const method of concernedBy(broken)) {
      const trial = trials.find((one) => one.method === method)!;
      const says = broken === 'one population' ? /trapped/ : /across the flow by preference/;
      expect(trial.ratio === null || says.test(trial.note), `${method}: ${trial.note}`).toBe(true);
    }
  },
);
