import type { Estimate } from '../estimates/estimate';
import { expectedFlow } from '../flow/expected-flow';
import {
  GAMMA_RELATIVE_ERROR,
  gammaAt,
  OWN_GAMMA_RELATIVE_ERROR,
  steadyLineDensity,
} from '../flow/steady-tangle';
import { Z95 } from '../normal-tail';
import { FREE, TRAPPED } from '../populations/codes';
import { widthOf } from '../resampling/clustered-ratios';
import { sumClusters } from '../resampling/sum-clusters';
import { trackSlice } from '../track-slice';
import type { Conditions, Tracks } from '../types';
import { alongAcross, trackVelocities, unitFlow } from '../velocities';

/** One measured value beside what the conditions let expect. Plain JSON. */
export interface Comparison {
  what: 'free along' | 'trapped along' | 'line density';
  unit: 'm/s' | 'm^-2';
  measured: { value: number; low: number; high: number } | null;
  expected: { name: string; value: number; low: number; high: number }[];
  /** Measured over the first expected value, errors of both in it; null where one is missing. */
  ratio: { value: number; low: number; high: number } | null;
  note: string;
}

/** Axis over mean velocity of laminar flow in a square duct (value from memory, unverified). */
const AXIS_OVER_MEAN = 2.1;

/**
 * Mean velocities along the flow beside v_n and v_s, and the line density beside gamma(T)^2 (v_ns - v_0)^2.
 * Expected velocities are means over the cross-section: a sheet near the axis of a laminar normal flow may
 * show up to twice as much.
 */
export function compareWithExpected(
  tracks: Tracks,
  population: Uint8Array,
  line: Int32Array,
  conditions: Conditions,
  estimates: readonly Estimate[],
  lagFrames: number,
): Comparison[] {
  const flow = unitFlow(conditions);
  const found = expectedFlow(conditions);
  const known = 'refused' in found ? null : found;
  const refused = 'refused' in found ? found.refused : null;
  const mean = (code: number, clusterOf: (track: number) => number) =>
    flow ? meanAlong(tracks, population, code, clusterOf, conditions, flow, lagFrames) : null;
  const withError = (name: string, value: number, relative: number) => {
    const half = Math.abs(value) * relative * Z95;
    return { name, value, low: value - half, high: value + half };
  };
  const flowNow = known?.flow;
  const vn = flowNow ? withError('v_n', flowNow.vnMS, flowNow.vnRelativeError) : null;
  const vs = flowNow ? withError('v_s', flowNow.vsMS, flowNow.vsRelativeError) : null;
  const noFlow = flow ? refused : 'The direction of the flow is not given.';
  const free = mean(FREE, (i) => i);
  const trapped = mean(TRAPPED, (i) => line[i]);
  const freeRatio = ratioOf(free, vn);
  return [
    {
      what: 'free along',
      unit: 'm/s',
      measured: free,
      expected: vn ? [vn] : [],
      ratio: freeRatio,
      note: noFlow ?? (free === null ? 'No track is named free.' : freeSentence(freeRatio)),
    },
    {
      what: 'trapped along',
      unit: 'm/s',
      measured: trapped,
      expected: vn && vs ? [vs, vn] : [],
      ratio: ratioOf(trapped, vs),
      note:
        noFlow ??
        (trapped === null
          ? 'No track is named trapped.'
          : 'Trapped tracers drift with the tangle, towards v_s at low heat, and are dragged by the normal fluid at high heat.'),
    },
    lineDensity(conditions, estimates, known, refused),
  ];
}

function freeSentence(ratio: Comparison['ratio']): string {
  if (!ratio) return 'No normal-fluid velocity is expected.';
  if (ratio.low <= 1 && ratio.high >= 1) return 'Free tracers move with the normal fluid within the errors.';
  if (ratio.value > 1 && ratio.low <= AXIS_OVER_MEAN)
    return 'Free tracers are quicker than the mean over the cross-section, as near the axis of a laminar normal flow.';
  return ratio.value < 1
    ? 'Free tracers are slower than the normal fluid: they may be held back by lines, near a wall, or the heat may leak.'
    : 'Free tracers are quicker than even the axis of a laminar normal flow: check heat flux, temperature and pixel size.';
}

function lineDensity(
  conditions: Conditions,
  estimates: readonly Estimate[],
  known: Exclude<ReturnType<typeof expectedFlow>, { refused: string }> | null,
  refused: string | null,
): Comparison {
  const combined = estimates.find((e) => e.quantity === 'line_density' && e.method === 'combined');
  const { value = null, low = null, high = null } = combined ?? {};
  const measured = value !== null && low !== null && high !== null ? { value, low, high } : null;
  const base = { what: 'line density', unit: 'm^-2', measured } as const;
  if (!known) return { ...base, expected: [], ratio: null, note: refused ?? '' };
  const own = conditions.gamma_s_m2 ?? null;
  const gamma = own ?? gammaAt(known.temperatureK);
  const vnsMS = known.flow.vnsMS;
  const v0MS = conditions.v0_m_s ?? 0;
  if (Number.isNaN(gamma)) {
    const note = 'No gamma is on file at this temperature (1.30 to 1.90 K); a run may state its own.';
    return { ...base, expected: [], ratio: null, note };
  }
  const density = steadyLineDensity(gamma, vnsMS, v0MS);
  if (!(density > 0)) {
    const note =
      vnsMS > 0
        ? 'The counterflow velocity is below the critical one: no steady tangle is expected.'
        : 'Without heat flux no steady tangle is expected.';
    return { ...base, expected: [], ratio: null, note };
  }
  const relative =
    2 * Math.hypot(own ? OWN_GAMMA_RELATIVE_ERROR : GAMMA_RELATIVE_ERROR, known.flow.vnsRelativeError);
  const spread = Math.exp(Z95 * relative);
  const expected = {
    name: 'gamma^2 (v_ns - v_0)^2',
    value: density,
    low: density / spread,
    high: density * spread,
  };
  const lnError = (of: { low: number; high: number }) => Math.log(of.high / of.low) / (2 * Z95);
  const ratio = measured
    ? lnRatio(measured.value / density, Math.hypot(lnError(measured), lnError(expected)))
    : null;
  const agrees = ratio && ratio.low <= 1 && ratio.high >= 1;
  return {
    ...base,
    expected: [expected],
    ratio,
    note: [
      own
        ? 'With the run’s own gamma.'
        : 'With a published gamma, from memory, unverified and of 30 % error.',
      ratio === null
        ? 'There is no combined value to compare with.'
        : agrees
          ? 'Measured and expected line density agree within their errors.'
          : `The measured line density is ${ratio.value < 1 ? 'lower' : 'higher'} than expected by more than the errors.`,
    ].join(' '),
  };
}

function lnRatio(value: number, error: number) {
  const spread = Math.exp(Z95 * error);
  return { value, low: value / spread, high: value * spread };
}

function ratioOf(
  measured: { value: number; low: number; high: number } | null,
  expected: { value: number; low: number; high: number } | null,
): Comparison['ratio'] {
  if (!measured || !expected || expected.value === 0) return null;
  const value = measured.value / expected.value;
  const half = Math.hypot(
    (measured.high - measured.low) / 2 / expected.value,
    (value * (expected.high - expected.low)) / 2 / expected.value,
  );
  return { value, low: value - half, high: value + half };
}

/** Mean velocity along the flow over all samples, tracks (lines) being independent. */
function meanAlong(
  tracks: Tracks,
  population: Uint8Array,
  code: number,
  clusterOf: (track: number) => number,
  conditions: Conditions,
  flow: readonly [number, number],
  lagFrames: number,
) {
  const own = (i: number) => (population[i] === code ? clusterOf(i) : null);
  const sums = sumClusters(1, tracks.count, own, (i, sum, count) => {
    const v = trackVelocities(trackSlice(tracks, i), lagFrames, conditions);
    for (let k = 0; k < v.frame.length; k++) sum[0] += alongAcross(v.vxMS[k], v.vyMS[k], flow)[0];
    count[0] += v.frame.length;
  });
  const { value, error, clusters } = sums.ratio(0);
  if (!Number.isFinite(error)) return null;
  const half = error * widthOf(clusters);
  return { value, low: value - half, high: value + half };
}
