import type { ErrorPoint } from '@/components/charts/series-marks';
import { paddedRange, type AxisRange } from '@/lib/charts/axis-ticks';
import { CONDITIONS, QUANTITIES, type ComparedQuantity, type ConditionName, type QuantityName } from '@/lib/compare/quantities'; // prettier-ignore
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { ComparedFit, ComparedRun } from '@/lib/views/compare-view';

const PER_MM = 1e-3;
/** Room beside points on an axis that does not begin at zero, as a share of it. */
const ROOM = 0.06;

/** Runs that have both quantities, in printed units: bars of 95 % up and down, one standard error along. */
export function comparedPoints(
  runs: readonly ComparedRun[],
  against: ConditionName,
  quantity: QuantityName = 'root-density',
): (ErrorPoint & { run: ComparedRun })[] {
  const [across, up]: ComparedQuantity[] = [CONDITIONS[against], QUANTITIES[quantity]];
  return runs.flatMap((run) => {
    const [x, y] = [across.of(run), up.of(run)];
    if (!x || !y) return [];
    return {
      key: run.runId,
      run,
      x: x.value / across.siPerUnit,
      xLow: (x.low ?? x.value) / across.siPerUnit,
      xHigh: (x.high ?? x.value) / across.siPerUnit,
      y: y.value / up.siPerUnit,
      yLow: (y.low ?? y.value) / up.siPerUnit,
      yHigh: (y.high ?? y.value) / up.siPerUnit,
      // A run without a line density may well have a trapped share; what a person left out stays faint everywhere.
      faint:
        quantity === 'root-density' || quantity === 'density' ? run.leftOut !== null : run.exclusion !== null,
    };
  });
}

/** Axes around all points, from zero where that means something. */
export function comparedRanges(
  points: readonly ErrorPoint[],
  against: ConditionName,
  quantity: QuantityName = 'root-density',
): { x: AxisRange; y: AxisRange } {
  const ends = (of: (point: ErrorPoint) => number[], fromZero: boolean, parts: number) => {
    const all = points.flatMap(of);
    const [least, most] = [Math.min(...all), Math.max(...all)];
    const room = ROOM * (most - least || Math.abs(most) || 1);
    return paddedRange(fromZero ? Math.min(0, least) : least - room, fromZero ? most * 1.04 : most + room, parts); // prettier-ignore
  };
  return {
    x: ends(({ xLow, xHigh }) => [xLow, xHigh], CONDITIONS[against].fromZero, 6),
    y: ends(({ yLow, yHigh }) => [yLow, yHigh], QUANTITIES[quantity].fromZero, 5),
  };
}

/** The fitted law from where it leaves zero to the end of the axis, in printed units. */
export function lawLine({ gamma_s_m2, v0_m_s }: ComparedFit, end: number): { x: number; y: number }[] {
  if (!gamma_s_m2 || !v0_m_s) return [];
  const { siPerUnit } = DISPLAY_UNITS.velocity;
  const slope = gamma_s_m2.value * siPerUnit * PER_MM;
  const start = v0_m_s.value / siPerUnit;
  const from = Math.max(0, start);
  return [
    { x: from, y: slope * (from - start) },
    { x: end, y: slope * (end - start) },
  ];
}
