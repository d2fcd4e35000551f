import { formatCount } from '../format/count';
import { quantityText } from '../format/quantity';
import { DISPLAY_UNITS, type DisplayUnit } from '../format/unit';
import type { MeasuresView } from '../views/analysis-view';

type Estimate = MeasuresView['estimates'][number];

/** One method's value of a quantity, SI, with words; null where it can't be had, and `note` says why. */
export interface EstimateRow {
  key: string;
  method: string;
  value: number | null;
  low: number | null;
  high: number | null;
  /** Ends with the systematic part. */
  wideLow?: number | null;
  wideHigh?: number | null;
  /** A prior, or left out of the combined value. */
  hollow: boolean;
  from?: string;
  note: string;
  combined: boolean;
}

const METHOD_NAMES: Record<string, string> = {
  crossings: 'Lines through the sheet',
  'visible-length': 'Visible line length',
  'beads-per-length': 'Tracers per length of line',
  'neighbour-distance': 'Nearest other line',
  'line-velocity': 'Line velocity',
  'free-path': 'Free path',
  'heat-flux-prior': 'Heat flux, prior',
  decay: 'Decay',
  'marked-chains': 'Marked chains',
  combined: 'Combined',
};

export const methodName = (method: string): string => METHOD_NAMES[method] ?? method;

/** What a value was counted from: the first of these inputs that it has. */
const COUNTED: readonly [input: string, words: string][] = [
  ['pairsOnOneLinePerFrame', 'pairs a frame'],
  ['pairsOnOneLine', 'pairs'],
  ['linesPerFrame', 'lines a frame'],
  ['lines', 'marked lines'],
  ['tracks', 'tracks'],
  ['velocities', 'velocities'],
  ['trappedPerFrame', 'tracers a frame'],
];

/** Standard errors of a two-sided 95 % interval. */
const Z95 = 1.96;

/** Estimates of one quantity as rows: those with a value, those without one, the combined one last. */
export function estimateRows(
  estimates: readonly Estimate[],
  quantity: string,
  unit: DisplayUnit,
): EstimateRow[] {
  const mine = estimates.filter((estimate) => estimate.quantity === quantity);
  const ordered = [...mine].sort((a, b) => placeOf(a) - placeOf(b));
  const used = ordered.find(({ method }) => method === 'combined')?.inputs ?? {};
  return ordered.map((estimate) => ({
    key: estimate.method,
    method: methodName(estimate.method),
    value: estimate.value,
    ...intervals(estimate),
    hollow: estimate.method !== 'combined' && !(estimate.method in used),
    from: countedFrom(estimate),
    note: noteOf(estimate, unit),
    combined: estimate.method === 'combined',
  }));
}

const placeOf = ({ method, value }: Estimate) => (method === 'combined' ? 2 : value === null ? 1 : 0);

/**
 * Thick and thin ends. The stored interval holds both errors; the part of chance alone stands in
 * the inputs as an error of ln L, and halves on the way to a spacing, which goes as L^(-1/2).
 */
function intervals({ value, low, high, inputs, quantity }: Estimate) {
  const ofLnL = inputs.statisticalErrorOfLnL?.value;
  if (value === null || typeof ofLnL !== 'number' || !(ofLnL > 0)) return { low, high };
  const spread = Math.exp(Z95 * (quantity === 'line_spacing' ? ofLnL / 2 : ofLnL));
  return { low: value / spread, high: value * spread, wideLow: low, wideHigh: high };
}

function countedFrom({ method, inputs }: Estimate): string | undefined {
  if (method === 'combined') {
    const usable = ([name, { value }]: [string, { value: unknown }]) =>
      name in METHOD_NAMES && value !== null;
    const methods = Object.entries(inputs).filter(usable).length;
    return methods > 0 ? `${methods} ${methods === 1 ? 'method' : 'methods'}` : undefined;
  }
  for (const [name, words] of COUNTED) {
    const value = inputs[name]?.value;
    if (typeof value !== 'number') continue;
    return `${value < 10 ? Number(value.toPrecision(2)) : formatCount(value)} ${words}`;
  }
  return undefined;
}

function noteOf({ value, low, high, note }: Estimate, { unit, siPerUnit }: DisplayUnit): string {
  if (value !== null) return note;
  const plain = unit.replace('m^-2', 'm⁻²').replace('10^8', '10⁸');
  if (low !== null)
    return `At least ${quantityText({ value: low, siPerUnit, digits: 2 })} × ${plain}. ${note}`;
  if (high !== null)
    return `At most ${quantityText({ value: high, siPerUnit, digits: 2 })} ${plain}. ${note}`;
  return note;
}

export const DENSITY_UNIT: DisplayUnit = DISPLAY_UNITS.lineDensity;
export const SPACING_UNIT: DisplayUnit = DISPLAY_UNITS.smallLength;

/** One sentence on whether the methods agree. */
export function agreementSentence(rows: readonly EstimateRow[]): string {
  const values = rows.flatMap((row) => (row.combined || row.hollow || row.value === null ? [] : row.value));
  const combined = rows.find((row) => row.combined);
  if (values.length === 0) return 'No method could be used; the reasons stand beside them.';
  if (values.length === 1) return 'One method could be used.';
  const factor = (Math.max(...values) / Math.min(...values)).toFixed(1);
  return combined?.value == null
    ? `The methods disagree by a factor of ${factor}, so there is no combined value.`
    : `The methods agree within a factor of ${factor}.`;
}
