import type { DerivedEntry, DerivedName, PlanWarning } from './derived-run';
import type { RunConditions } from './run-conditions';

/** Step over neighbour distance above which linking is unreliable without prediction (Malik, Dracos & Papantoniou 1993). */
const STEP_OVER_SPACING_MAX = 0.5;
/** A streak longer than this blurs a spot of about one pixel visibly (common practice, no source). */
const STREAK_MAX_PX = 1.5;
/** Two spots nearer than this overlap (about 4 spot widths of 1 px). */
const RESOLVED_PX = 4;
/** Settling above this part of the normal-fluid velocity moves tracers noticeably (common practice). */
const SETTLING_PART_MAX = 0.2;

/** Plain warnings about a plan that can't work, or only in part. */
export function planWarnings(run: RunConditions, entries: Record<DerivedName, DerivedEntry>): PlanWarning[] {
  const warnings: PlanWarning[] = [];
  const warn = (code: string, field: string, detail: string) => warnings.push({ code, detail, field });
  const { pixelSize_m: pixelM, frameInterval_s: dtS, exposure_s: exposureS } = run;
  const stepPx = entries.stepPerFrame_px.value;
  const spacingM = entries.expectedSpacing_m.value;

  if (stepPx !== null && pixelM && run.tracersPerArea_m2) {
    const neighbourPx = 0.5 / Math.sqrt(run.tracersPerArea_m2) / pixelM;
    if (stepPx > STEP_OVER_SPACING_MAX * neighbourPx) {
      const relation = stepPx > neighbourPx ? 'more than' : 'more than half';
      const advice = 'Shorten the frame interval or seed less.';
      warn(
        'STEP_LARGER_THAN_SPACING',
        'frameInterval_s',
        `A tracer moves ${stepPx.toFixed(1)} px between frames, ${relation} the ${neighbourPx.toFixed(1)} px to its nearest neighbour. ${advice}`,
      );
    }
  }
  if (exposureS && dtS && exposureS > dtS) {
    warn('EXPOSURE_LONGER_THAN_INTERVAL', 'exposure_s', 'The exposure is longer than the frame interval.');
  } else if (exposureS && dtS && stepPx !== null) {
    const streakPx = (stepPx * exposureS) / dtS;
    if (streakPx > STREAK_MAX_PX) {
      warn(
        'EXPOSURE_BLUR',
        'exposure_s',
        `A tracer moves ${streakPx.toFixed(1)} px during the exposure and leaves a streak. Shorten the exposure.`,
      );
    }
  }
  if (spacingM !== null && pixelM && spacingM < RESOLVED_PX * pixelM) {
    warn(
      'SPACING_BELOW_RESOLUTION',
      'pixelSize_m',
      `The lines are expected ${(spacingM / pixelM).toFixed(1)} px apart: neighbours cannot be told apart.`,
    );
  }
  if (spacingM !== null && run.sheetThickness_m && run.sheetThickness_m > spacingM) {
    warn(
      'SHEET_THICKER_THAN_SPACING',
      'sheetThickness_m',
      'The light sheet is thicker than the expected line spacing: several lines lie behind each other, and spacing from neighbour distances comes out too small.',
    );
  }
  if (entries.expectedSpacing_m.unverified) {
    warn(
      'GAMMA_UNVERIFIED',
      'gamma_s_m2',
      'The expected spacing rests on a published γ that is unverified and scatters by 30 % between channels. Enter your own where you know it.',
    );
  }
  const settlingMS = entries.settling_m_s.value;
  const vnMS = entries.vn_m_s.value;
  if (settlingMS !== null && vnMS && Math.abs(settlingMS) > SETTLING_PART_MAX * Math.abs(vnMS)) {
    warn(
      'SETTLING_MATTERS',
      'tracer.density_kg_m3',
      `Tracers ${settlingMS > 0 ? 'sink' : 'rise'} at ${Math.round((100 * Math.abs(settlingMS)) / Math.abs(vnMS))} % of the normal-fluid velocity.`,
    );
  }
  if (vnMS !== null && vnMS > 0 && !run.flowDirection) {
    warn(
      'FLOW_DIRECTION_MISSING',
      'flowDirection',
      'Without the direction of the flow, velocities along and across it are left out and populations are not named by it.',
    );
  }
  return warnings;
}
