import { paddedRange, type AxisRange } from '@/lib/charts/axis-ticks';
import type { ErrorPoint } from '@/components/charts/series-marks';
import { rootDensity } from '@/lib/compare/fit-campaigns';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { ComparedFit, ComparedRun } from '@/lib/views/compare-view';
import type { Against } from './use-comparison';

const PER_MM = 1e-3;
const { velocity, heatFlux } = DISPLAY_UNITS;

/** Where a run stands on the axis, in the printed unit, with its standard error; null where unknown. */
function place(run: ComparedRun, against: Against): { value: number; error: number } | null {
  if (against === 'temperature')
    return run.temperature_K === null ? null : { value: run.temperature_K, error: 0 };
  if (against === 'heat-flux') {
    return run.heatFlux_W_m2 === null ? null : { value: run.heatFlux_W_m2 / heatFlux.siPerUnit, error: 0 };
  }
  if (!run.vns_m_s) return null;
  return {
    value: Math.abs(run.vns_m_s.value) / velocity.siPerUnit,
    error: (run.vns_m_s.error ?? 0) / velocity.siPerUnit,
  };
}

/** L^(1/2) in 1/mm of the runs that have one, with bars of 95 % up and down and one standard error along. */
export function comparedPoints(
  runs: readonly ComparedRun[],
  against: Against,
): (ErrorPoint & { run: ComparedRun })[] {
  return runs.flatMap((run) => {
    const at = place(run, against);
    if (!at || !run.lineDensity_m2) return [];
    const { root } = rootDensity(run.lineDensity_m2);
    const end = (value: number | null) => (value === null ? root : Math.sqrt(value)) * PER_MM;
    return {
      key: run.runId,
      run,
      x: at.value,
      xLow: at.value - at.error,
      xHigh: at.value + at.error,
      y: root * PER_MM,
      yLow: end(run.lineDensity_m2.low),
      yHigh: end(run.lineDensity_m2.high),
      faint: run.leftOut !== null,
    };
  });
}

/** Axes around all points; velocities and heat fluxes from 0. */
export function comparedRanges(
  points: readonly ErrorPoint[],
  against: Against,
): { x: AxisRange; y: AxisRange } {
  const ends = points.flatMap(({ xLow, xHigh }) => [xLow, xHigh]);
  const top = Math.max(...points.map(({ yHigh }) => yHigh));
  const first = against === 'temperature' ? Math.min(...ends) - 0.02 : 0;
  const last = Math.max(...ends);
  return {
    x: paddedRange(first, against === 'temperature' ? last + 0.02 : last * 1.04, 6),
    y: paddedRange(0, top * 1.04, 5),
  };
}

/** The fitted law from where it leaves zero to the end of the axis, in printed units. */
export function lawLine({ gamma_s_m2, v0_m_s }: ComparedFit, end: number): { x: number; y: number }[] {
  if (!gamma_s_m2 || !v0_m_s) return [];
  const slope = gamma_s_m2.value * velocity.siPerUnit * PER_MM;
  const start = v0_m_s.value / velocity.siPerUnit;
  const from = Math.max(0, start);
  return [
    { x: from, y: slope * (from - start) },
    { x: end, y: slope * (end - start) },
  ];
}
