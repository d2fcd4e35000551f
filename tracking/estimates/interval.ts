import { Z95 } from '../normal-tail';
import { spacingFromDensity } from './stereology';
import type { Estimate, EstimateInput, EstimateMethod } from './estimate';

export const LEVEL = 0.95;

/** One way to the line density, before it is written down as density and as spacing. */
export interface DensityResult {
  method: EstimateMethod;
  /** Line density, m^-2; null where the method can't be used. */
  valueM2: number | null;
  /** Standard errors of ln L: from chance, and from what the method takes for granted. */
  statistical: number;
  systematic: number;
  inputs: Record<string, EstimateInput>;
  note: string;
  /** Where only a lower limit is known. */
  atLeastM2?: number;
}

/** A method that can't be used, and why. */
export function notUsable(
  method: EstimateMethod,
  note: string,
  inputs: Record<string, EstimateInput> = {},
  atLeastM2?: number,
): DensityResult {
  return { method, valueM2: null, statistical: Number.NaN, systematic: Number.NaN, inputs, note, atLeastM2 };
}

/** Both published quantities of one result; the interval holds statistical and systematic errors. */
export function asEstimates(result: DensityResult): [Estimate, Estimate] {
  const { valueM2, statistical, systematic, method, note } = result;
  const inputs = { ...result.inputs };
  let [low, high]: (number | null)[] = [result.atLeastM2 ?? null, null];
  if (valueM2 !== null) {
    const spread = Math.exp(Z95 * Math.hypot(statistical, systematic));
    low = valueM2 / spread;
    high = valueM2 * spread;
    inputs.statisticalErrorOfLnL = { value: statistical, unit: '' };
    inputs.systematicErrorOfLnL = { value: systematic, unit: '' };
  }
  const spacing = (density: number | null) => (density === null ? null : spacingFromDensity(density));
  return [
    { quantity: 'line_density', unit: 'm^-2', method, value: valueM2, low, high, level: LEVEL, inputs, note },
    {
      quantity: 'line_spacing',
      unit: 'm',
      method,
      value: spacing(valueM2),
      low: spacing(high),
      high: spacing(low),
      level: LEVEL,
      inputs,
      note,
    },
  ];
}

/** Standard deviation of a quantity's logarithm over draws; NaN where fewer than 2 are positive. */
export function lnSpread(draws: readonly number[]): number {
  const ln = draws.filter((v) => v > 0 && Number.isFinite(v)).map(Math.log);
  if (ln.length < 2) return Number.NaN;
  const mean = ln.reduce((a, b) => a + b, 0) / ln.length;
  return Math.sqrt(ln.reduce((sum, v) => sum + (v - mean) ** 2, 0) / (ln.length - 1));
}
