import { describe, expect, it } from 'vitest';
import { conditionsOfRun } from '@/models/queries/run-conditions';
import type { Run } from '@/models/run';
import { expectWithin } from '../helpers/expect-within';

const run = {
  pixelSizeM: 8e-6,
  frameIntervalS: 4e-3,
  drive: 'counterflow',
  heatFluxWM2: 1000,
  heatLeakW: 0.02,
  channel: { shape: 'rectangular', width_m: 0.01, depth_m: 0.01 },
} as Run;

describe('conditions that an analysis is computed with', () => {
  it('have the heat flux less the heat leak over the cross-section', () => {
    // 1000 W/m2 - 0.02 W / 1e-4 m2, by arithmetic.
    expectWithin(conditionsOfRun(run)!.heatFlux_W_m2!, 800, { abs: 1e-9 });
  });

  it('have no heat flux where a grid drives the flow', () => {
    expect(conditionsOfRun({ ...run, drive: 'towed-grid' } as Run)!.heatFlux_W_m2).toBeNull();
  });

  it('do not exist before pixel size and frame interval are known', () => {
    expect(conditionsOfRun({ ...run, pixelSizeM: null } as Run)).toBeNull();
  });
});
