import { describe, expect, test } from 'vitest';
import { counterflow } from '@/tracking/flow/counterflow';
import { deriveRun } from '@/tracking/flow/derive-run';
import { decayOfRandomTangle, lateDecay } from '@/tracking/flow/line-density-decay';
import { radiusFromSettling, settling } from '@/tracking/flow/settling';
import { steadyLineDensity } from '@/tracking/flow/steady-tangle';
import { heliumAt, isRefusal, type HeliumProperties } from '@/tracking/helium/helium-at';
import { KAPPA_M2_S } from '@/tracking/units';
import { expectWithin } from '@/tests/helpers/expect-within';

function helium(temperatureK: number): HeliumProperties {
  const found = heliumAt(temperatureK);
  if (isRefusal(found)) throw new Error(found.refused);
  return found;
}

describe('counterflow', () => {
  // v_n = q / (rho S T) with the 1998 tables (Donnelly & Barenghi) at 1.65 K, 1000 W/m^2.
  test('velocities follow the two-fluid model', () => {
    const flow = counterflow(helium(1.65), 1000);
    expectWithin(flow.vnMS, 12.457e-3, { abs: 0.05e-3 });
    expectWithin(flow.vsMS, -2.986e-3, { abs: 0.02e-3 });
    expectWithin(flow.vnsMS, 15.443e-3, { abs: 0.05e-3 });
    expect(flow.vnsMS).toBe(flow.vnMS - flow.vsMS);
  });

  test('no mass flows at any temperature and heat flux', () => {
    for (let t = 1.3; t <= 2.15; t += 0.05) {
      for (const q of [1, 500, 3000]) {
        const he = helium(t);
        const flow = counterflow(he, q);
        const flux = he.normalDensityKgM3 * flow.vnMS + he.superfluidDensityKgM3 * flow.vsMS;
        expectWithin(flux, 0, { abs: 1e-9 * he.normalDensityKgM3 * flow.vnMS });
      }
    }
  });

  test('a bath error of 10 mK alone is 4 % of v_n at 1.65 K', () => {
    // d ln(ST)/dT = 3.95 per K at 1.65 K: (c/S + 1)/T with the same tables.
    const he = { ...helium(1.65), errors: { ...helium(1.65).errors, entropy: 0 } };
    const flow = counterflow(he, 1000, { heatFlux: 0, temperatureK: 0.01 });
    expectWithin(flow.vnRelativeError, 0.0395, { abs: 0.0005 });
  });
});

test('the steady tangle gives L = gamma^2 v_ns^2', () => {
  // Form of Adachi, Fujiyama & Tsubota (2010); gamma 109.6 s/cm^2 is a value from memory.
  const density = steadyLineDensity(109.6e4, 0.01);
  expectWithin(density, 1.2012e8, { rel: 0.001 });
  expectWithin(1 / Math.sqrt(density), 91.24e-6, { rel: 0.001 });
});

test('decay laws give their published forms', () => {
  // Vinen (1957): 1/L grows by chi2 kappa t / 2 pi. Skrbek & Stalp (2000): t^-3/2.
  expectWithin(decayOfRandomTangle(1e10, 1, 1), 6.2631e7, { rel: 0.001 });
  expectWithin(lateDecay(0.01, 0.1 * KAPPA_M2_S, 10), 4.827e7, { rel: 0.002 });
});

test('settling follows Stokes with the drag of the normal fluid', () => {
  // Density of solid hydrogen: Woolley, Scott & Brickwedde (1948).
  expectWithin(settling(helium(1.65), 2e-6, 88).velocityMS, -0.0963e-3, { rel: 0.01 });
  expectWithin(radiusFromSettling(helium(1.65), 0.1115e-3, 200), 1.1e-6, { rel: 0.005 });
});

const RUN = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  exposure_s: 0.001,
  sheetThickness_m: 5e-5,
  temperature_K: 1.65,
  heatFlux_W_m2: 1000,
  flowDirection: [0, -1] as [number, number],
  tracer: { species: 'D2', diameter_m: 2.2e-6 },
};

describe('a run', () => {
  test('shows all its derived quantities', () => {
    const { values, warnings } = deriveRun(RUN);
    // Step: 12.457 mm/s * 5 ms / 10 um.
    expectWithin(values.stepPerFrame_px ?? Number.NaN, 6.23, { abs: 0.03 });
    // Tang et al., Nat. Commun. 14, 2941 (2023): 1.1 um radius settles at 0.1115 mm/s.
    expectWithin(values.settling_m_s ?? Number.NaN, 0.1115e-3, { rel: 0.01 });
    expect(Object.values(values).every((value) => value !== null)).toBe(true);
    expect(warnings.map((w) => w.code)).toContain('GAMMA_UNVERIFIED');
  });

  test('above the lambda point has no values and says why', () => {
    const { values, warnings } = deriveRun({ ...RUN, temperature_K: 2.3 });
    expect(Object.values(values).every((value) => value === null)).toBe(true);
    expect(warnings[0]).toEqual({
      code: 'ABOVE_LAMBDA_POINT',
      detail: '2.30 K is above the lambda point: there is no superfluid. Enter 1.30 to 2.15 K.',
      field: 'temperature_K',
    });
  });

  test('an empty form throws nothing and gives a reason for each missing value', () => {
    const { entries } = deriveRun({});
    for (const entry of Object.values(entries)) {
      expect(entry.value).toBeNull();
      expect(entry.reason).toMatch(/\w.*\.$/);
    }
  });

  test.each([
    ['STEP_LARGER_THAN_SPACING', { tracersPerArea_m2: 5e8 }],
    ['EXPOSURE_BLUR', { exposure_s: 0.0049 }],
    ['EXPOSURE_LONGER_THAN_INTERVAL', { exposure_s: 0.006 }],
    ['STOKES_LAW_INVALID', { tracer: { species: 'glass', diameter_m: 1e-5, density_kg_m3: 1100 } }],
    ['SHEET_THICKER_THAN_SPACING', { sheetThickness_m: 1e-3 }],
    ['SPACING_BELOW_RESOLUTION', { heatFlux_W_m2: 3000 }],
    ['NEAR_LAMBDA_POINT', { temperature_K: 2.12 }],
    ['OUTSIDE_HELIUM_TABLE', { temperature_K: 1.2 }],
    ['FLOW_DIRECTION_MISSING', { flowDirection: null }],
    ['TEMPERATURE_AND_PRESSURE_DISAGREE', { pressure_Pa: 3129.97 }],
    ['HEAT_LEAK_NOT_USED', { heatLeak_W: 0.01 }],
    ['SETTLING_MATTERS', { heatFlux_W_m2: 10 }],
  ])('warns %s exactly when the plan has that fault', (code, change) => {
    expect(deriveRun(RUN).warnings.map((w) => w.code)).not.toContain(code);
    expect(deriveRun({ ...RUN, ...change }).warnings.map((w) => w.code)).toContain(code);
  });

  test('the heat leak is subtracted over the channel', () => {
    const channel = { shape: 'rectangular' as const, width_m: 0.01, depth_m: 0.02, length_m: 0.1 };
    const { values } = deriveRun({ ...RUN, heatLeak_W: 0.1, channel });
    // 0.1 W over 2 cm^2 is half of 1000 W/m^2.
    expectWithin(values.vn_m_s ?? Number.NaN, 12.457e-3 / 2, { abs: 0.025e-3 });
  });

  test('a run driven otherwise has no counterflow velocity', () => {
    const { values, entries } = deriveRun({ ...RUN, drive: 'towed-grid' });
    expect(values.vn_m_s).toBeNull();
    expect(entries.vn_m_s.reason).toContain('not driven by heat');
    expect(values.rhoSRatio).not.toBeNull();
  });

  test('hydrogen tracers bring the flammable-gas caution, glass does not', () => {
    const codes = (species: string) => deriveRun({ ...RUN, tracer: { species } }).cautions.map((c) => c.code);
    expect(codes('H2/D2 mixture')).toEqual(['LIQUID_HELIUM', 'FLAMMABLE_GAS', 'LASER', 'PRESSURE_VESSEL']);
    expect(codes('solid hydrogen')).toContain('FLAMMABLE_GAS');
    expect(codes('hollow glass')).toEqual(['LIQUID_HELIUM', 'LASER', 'PRESSURE_VESSEL']);
  });
});
