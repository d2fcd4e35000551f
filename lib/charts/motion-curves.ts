import { decadeRange, paddedRange, type AxisRange } from './axis-ticks';
import type { Curve } from './curve';
import { quantityText } from '../format/quantity';
import type { MotionView } from '../views/motion-view';

type Displacement = MotionView['displacements'][number];
type Autocorrelation = MotionView['autocorrelations'][number];
type Shown = { population: Displacement['population'] };

export const MS_PER_S = 1e3;
const UM2_PER_M2 = 1e12;

/** The populations that were told apart, or all tracks together where none was. */
export function toldApart<T extends Shown>(list: readonly T[]): T[] {
  const told = list.filter(({ population }) => population === 'trapped' || population === 'free');
  return told.length > 0 ? told : list.filter(({ population }) => population === 'all');
}

/** Components that were measured, in the order of the choice. */
export function motionComponents(list: readonly { component: string }[]): string[] {
  const order = ['along', 'across', 'x', 'y', 'total', 'speed'];
  return order.filter((name) => list.some(({ component }) => component === name));
}

export const spreadCurve = ({
  population,
  lag_s,
  value_m2,
  low_m2,
  high_m2,
  exponent,
}: Displacement): Curve => ({
  population,
  finding: exponent ? `exponent ${printed(exponent.value, exponent.low, exponent.high)}` : undefined,
  points: lag_s.map((lag, c) => ({
    x: lag * MS_PER_S,
    y: value_m2[c] > 0 ? value_m2[c] * UM2_PER_M2 : null,
    low: scaled(low_m2[c], UM2_PER_M2),
    high: scaled(high_m2[c], UM2_PER_M2),
  })),
});

export const memoryCurve = ({ population, lag_s, value, low, high, memory_s }: Autocorrelation): Curve => ({
  population,
  finding: memory_s === null ? undefined : `memory ${formatPlain(memory_s * MS_PER_S)} ms`,
  points: lag_s.map((lag, c) => ({ x: lag * MS_PER_S, y: value[c], low: low[c], high: high[c] })),
});

/** Axes of a log-log plot around curves; null where nothing is positive. */
export function logRanges(curves: readonly Curve[]): { x: AxisRange; y: AxisRange } | null {
  const points = curves.flatMap((curve) => curve.points);
  const y = decadeRange(points.map((point) => point.y ?? Number.NaN));
  const lags = points.map((point) => point.x).filter((lag) => lag > 0);
  if (!y || lags.length === 0) return null;
  const [least, most] = [Math.min(...lags), Math.max(...lags)];
  return { x: { min: least / 1.25, max: most * 1.25, log: true }, y };
}

/** Axes of correlations: never less than 0 to 1. */
export function memoryRanges(curves: readonly Curve[]): { x: AxisRange; y: AxisRange } {
  const points = curves.flatMap((curve) => curve.points);
  const values = points.map((point) => point.y ?? 0);
  return {
    x: paddedRange(0, Math.max(...points.map((point) => point.x))),
    y: paddedRange(
      Math.min(0, Math.max(-1, Math.min(...values))),
      Math.max(1, Math.min(1.2, Math.max(...values))),
    ),
  };
}

/** A value with its interval in words. */
export const printed = (value: number, low: number | null, high: number | null): string =>
  quantityText({ value, low, high, digits: 3 });

const formatPlain = (value: number) => quantityText({ value, digits: 2 });
const scaled = (value: number | null, by: number) => (value === null ? null : value * by);
