import type { Estimate, EstimateInput } from '@/tracking/estimates/estimate';

/** Eight significant digits are more than any estimate deserves, and the same on every machine. */
const rounded = (value: number | null): number | null =>
  value === null || !Number.isFinite(value) ? null : Number(value.toPrecision(8));

const roundedInput = ({ value, unit }: EstimateInput): EstimateInput => ({
  value: typeof value === 'number' ? rounded(value) : value,
  unit,
});

/** `estimates.json`: a list with its keys in a fixed order, ending with a line feed. */
export function estimatesJson(estimates: readonly Estimate[]): string {
  const list = estimates.map((e) => ({
    quantity: e.quantity,
    unit: e.unit,
    method: e.method,
    value: rounded(e.value),
    low: rounded(e.low),
    high: rounded(e.high),
    level: e.level,
    inputs: Object.fromEntries(Object.entries(e.inputs).map(([name, input]) => [name, roundedInput(input)])),
    note: e.note,
  }));
  return `${JSON.stringify(list, null, 2)}\n`;
}
