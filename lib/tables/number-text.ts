/**
 * Numbers as text for files: point decimals, no grouping, the same bytes on every machine. Empty
 * for what is unknown (null, NaN, infinite).
 */
export function significant(value: number | null, digits: number): string {
  if (value === null || !Number.isFinite(value)) return '';
  return String(Number(value.toPrecision(digits)));
}

/** A fixed number of decimals; never a negative zero. */
export function decimals(value: number | null, places: number): string {
  if (value === null || !Number.isFinite(value)) return '';
  const text = value.toFixed(places);
  return Number(text) === 0 ? text.replace('-', '') : text;
}
