import type { RehearsalPlan } from '@/tracking/rehearsal/plan';

/** A small counterflow in which everything can be recovered: both kinds of tracers, meetings, enough light. */
export const REHEARSAL_PLAN: RehearsalPlan = {
  conditions: {
    pixelSize_m: 8e-6,
    frameInterval_s: 4e-3,
    exposure_s: 1e-3,
    sheetThickness_m: 6e-5,
    temperature_K: 1.85,
    heatFlux_W_m2: 300,
    drive: 'counterflow',
    flowDirection: [1, 0],
  },
  scene: {
    widthPx: 160,
    heightPx: 160,
    frames: 60,
    seeding_m2: 2.5e7,
    trappedShare: 0.6,
    lineDensity_m2: 2e7,
    brightness_e: 500,
    snr: null,
    brightnessSpread: 0.5,
    meetings: 5,
  },
  camera: { spotSizePx: 1.2, background_e: 12, readNoise_e: 1.5, edgeLight: 0.6 },
  seed: 11,
};
