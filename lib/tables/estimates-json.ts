import type { Estimate, EstimateInput } from '@/tracking/estimates/estimate';

/** Eight significant digits are more than any estimate deserves, and the same on every machine. */
const rounded = (value: number | null): number | null =>
  value === null || !Number.isFinite(value) ? null : Number(value.toPrecision(8));

const roundedInput = ({ value, unit }: EstimateInput): EstimateInput => ({
  value: typeof value === 'number' ? rounded(value) : value,
  unit,
});

/** By name: a database keeps keys in an order of its own, and the bytes must not tell where the list came from. */
const sortedInputs = (inputs: Estimate['inputs']): Estimate['inputs'] =>
  Object.fromEntries(
    Object.keys(inputs)
      .sort()
      .map((name) => [name, roundedInput(inputs[name])]),
  );

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
    inputs: sortedInputs(e.inputs),
    note: e.note,
  }));
  return `${JSON.stringify(list, null, 2)}\n`;
}
