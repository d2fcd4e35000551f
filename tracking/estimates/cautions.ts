import { ClusteredRatios } from '../resampling/clustered-ratios';
import { unitFlow } from '../velocities';
import type { EstimateContext } from './context';
import { seenLines } from './seen-lines';
import { decoratedShare } from './sheet-geometry';
import { usedPart } from './used-tracks';

/** Below this share of lines with a tracer the correction for dark lines is larger than what is counted. */
const DECORATED_LEAST = 0.3;
/** A preference of direction smaller than this changes the result by less than its errors. */
const ORDER_LEAST = 0.3;

/** Says where most lines carry no tracer; empty otherwise. */
export function darkLines({ fellows, used, conditions }: EstimateContext): string {
  const h = conditions.sheetThickness_m;
  if (!fellows || !h) return '';
  const seen = fellows.byLine && seenLines(fellows.byLine, h);
  const share = seen?.share ?? decoratedShare(fellows.tracersPerLengthM * usedPart(used) * h);
  return share < DECORATED_LEAST
    ? ` Few lines are decorated (${Math.round(100 * share)} % carry a tracer), so the result rests on the correction for dark ones.`
    : '';
}

/**
 * Says where the pieces between tracers of one line lie along or across the flow by preference, against
 * what the formulas take for granted; empty where that can't be told.
 */
export function lineDirections({ groups, conditions }: EstimateContext): string {
  const flow = unitFlow(conditions) ?? [1, 0];
  const byLine = new Map<number, [number, number]>();
  for (const { rigid, trackA, dxPx, dyPx } of groups.pairs) {
    const d2 = dxPx * dxPx + dyPx * dyPx;
    if (!rigid || d2 === 0) continue;
    const along = dxPx * flow[0] + dyPx * flow[1];
    const row = byLine.get(groups.line[trackA]) ?? [0, 0];
    row[0] += 2 * ((along * along) / d2) - 1;
    row[1]++;
    byLine.set(groups.line[trackA], row);
  }
  const order = new ClusteredRatios(1);
  for (const [sum, count] of byLine.values()) order.add([sum], [count]);
  const { low, high } = order.ratio(0);
  if (low === null || high === null) return '';
  if (high < -ORDER_LEAST)
    return ' The lines lie across the flow by preference: a formula for isotropic ones gives a quarter to nearly a half too much.';
  if (low > ORDER_LEAST)
    return ' The lines lie along the flow by preference, which a formula for isotropic ones doesn’t allow for.';
  return '';
}
