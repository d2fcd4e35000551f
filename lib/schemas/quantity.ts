import { z } from 'zod';

/** Bounds of a physical quantity, in SI, and how the bound reads in the unit a laboratory uses. */
export interface QuantityBounds {
  name: string;
  min?: number;
  /** The bound itself is not allowed. */
  above?: number;
  max?: number;
  /** Unit of the words, and how many SI units one of it is. */
  unit: string;
  siPerUnit: number;
}

const shown = (value: number, { siPerUnit }: QuantityBounds) =>
  String(Number((value / siPerUnit).toPrecision(6)));

/** `Pixel size must be a number above 0 and at most 1000 um (you typed '-3').` */
export function rangeSentence(bounds: QuantityBounds, typed: unknown): string {
  const parts = [
    bounds.above !== undefined ? `above ${shown(bounds.above, bounds)}` : null,
    bounds.min !== undefined ? `at least ${shown(bounds.min, bounds)}` : null,
    bounds.max !== undefined ? `at most ${shown(bounds.max, bounds)}` : null,
  ].filter((part) => part !== null);
  const range = parts.length > 0 ? ` ${parts.join(' and ')}` : '';
  const text = typed === undefined || typed === null ? '' : String(typed).slice(0, 40);
  return `${bounds.name} must be a number${range} ${bounds.unit}`.trimEnd() + ` (you typed '${text}').`;
}

/** Whether a value is a finite number inside the bounds. */
export function isWithin(value: unknown, { min, above, max }: QuantityBounds): value is number {
  return (
    typeof value === 'number' &&
    Number.isFinite(value) &&
    (min === undefined || value >= min) &&
    (above === undefined || value > above) &&
    (max === undefined || value <= max)
  );
}

/** A number in SI inside its bounds. What was typed is shown back in the unit of the words. */
export function quantity(bounds: QuantityBounds) {
  const typed = (input: unknown) =>
    typeof input === 'number' && Number.isFinite(input) ? shown(input, bounds) : input;
  let schema = z.number({ error: (issue) => rangeSentence(bounds, typed(issue.input)) });
  const error = { error: (issue: { input?: unknown }) => rangeSentence(bounds, typed(issue.input)) };
  if (bounds.above !== undefined) schema = schema.gt(bounds.above, error);
  if (bounds.min !== undefined) schema = schema.gte(bounds.min, error);
  if (bounds.max !== undefined) schema = schema.lte(bounds.max, error);
  return schema;
}
