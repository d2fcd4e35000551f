import type { MotionView } from '@/lib/views/motion-view';
import type { MotionMeasures } from '@/tracking/flow-measures';

/** Stored measures of motion under the names and units of the API. */
export const motionView = ({ displacements, autocorrelations, tails }: MotionMeasures): MotionView => ({
  displacements: displacements.map((one) => ({
    population: one.population,
    component: one.component,
    lag_s: one.lagS,
    value_m2: one.valueM2,
    low_m2: one.lowM2,
    high_m2: one.highM2,
    noise_m2: one.noiseM2,
    tracks: one.tracks,
    exponent: one.exponent,
  })),
  autocorrelations: autocorrelations.map((one) => ({
    population: one.population,
    component: one.component,
    lag_s: one.lagS,
    value: one.value,
    low: one.low,
    high: one.high,
    variance_m2_s2: one.varianceM2S2,
    memory_s: one.memoryS,
    tracks: one.tracks,
  })),
  tails: tails.map((one) => ({
    population: one.population,
    component: one.component,
    lag_s: one.lagS,
    lagFrames: one.lagFrames,
    meanPath_m: one.meanPathM,
    samples: one.samples,
    tailSamples: one.tailSamples,
    tailTracks: one.tailTracks,
    exponent: one.exponent,
    exponentLow: one.exponentLow,
    exponentHigh: one.exponentHigh,
    from_m_s: one.fromMS,
    gaussian: one.gaussian,
    logNormal: one.logNormal,
    verdict: one.verdict,
  })),
});
