import { groupDigits } from './count';

/**
 * How a quantity is printed. Rule of this product: the uncertainty is rounded to one digit, to two
 * if its first digit is 1, and the value to the same place. Exports keep full precision.
 */
export interface QuantityInput {
  /** In SI; null, NaN and infinite mean unknown. */
  value: number | null | undefined;
  /** Half width of a symmetric interval, same unit as `value`. */
  uncertainty?: number | null;
  /** Ends of an interval; printed as "low to high" when it is lopsided. Wins over `uncertainty`. */
  low?: number | null;
  high?: number | null;
  /** How many SI units one of the printed unit is: 1e-6 prints metres in micrometres, 1e8 takes a power of ten out. */
  siPerUnit?: number;
  /** Digits of a value that has no uncertainty. */
  digits?: number;
}

/** Pieces for a component to set in type. `exponent` is the power of ten taken out, 0 for none. */
export interface QuantityText {
  value: string;
  uncertainty: string | null;
  range: { low: string; high: string } | null;
  exponent: number;
}

/** Half widths whose ratio is above this are printed as an interval: `1.4 (0.4 to 4.6)`. */
const LOPSIDED_RATIO = 1.5;
/** Outside 1e-3 ... 1e6 a power of ten is taken out of the number. */
const PLAIN_EXPONENT_MIN = -3;
const PLAIN_EXPONENT_MAX = 5;

const exponentOf = (value: number) => Number(value.toExponential().split('e')[1]);
const known = (value: number | null | undefined): value is number =>
  value !== null && value !== undefined && Number.isFinite(value);

/** The decimal place (power of ten) of the last digit that an uncertainty deserves; > 0 input. */
export function lastPlace(uncertainty: number): number {
  if (uncertainty.toExponential().startsWith('1')) return exponentOf(uncertainty) - 1;
  // 0.096 rounds to 0.1, and its first digit is then a 1.
  const [first, exponent] = uncertainty.toExponential(0).split('e');
  return first === '1' ? Number(exponent) - 1 : Number(exponent);
}

/** A number rounded at a decimal place: place -2 gives two decimals, place 2 whole hundreds. */
export function roundedAt(value: number, place: number): string {
  if (place <= 0) return groupDigits(noNegativeZero(value.toFixed(Math.min(100, -place))));
  const step = 10 ** place;
  return groupDigits(noNegativeZero((Math.round(value / step) * step).toFixed(0)));
}

const noNegativeZero = (text: string) => (Number(text) === 0 ? text.replace('-', '') : text);

function takeOutPower(size: number): number {
  if (size === 0) return 0;
  const exponent = exponentOf(size);
  return exponent < PLAIN_EXPONENT_MIN || exponent > PLAIN_EXPONENT_MAX ? exponent : 0;
}

/** The text pieces of a quantity; null when its value is unknown. */
export function formatQuantity(input: QuantityInput): QuantityText | null {
  if (!known(input.value)) return null;
  const siPerUnit = input.siPerUnit ?? 1;
  const value = input.value / siPerUnit;
  const low = known(input.low) ? input.low / siPerUnit : null;
  const high = known(input.high) ? input.high / siPerUnit : null;
  const hasInterval = low !== null && high !== null && high > low;
  const down = hasInterval ? value - low : 0;
  const up = hasInterval ? high - value : 0;
  const half = hasInterval
    ? (high - low) / 2
    : known(input.uncertainty)
      ? Math.abs(input.uncertainty) / siPerUnit
      : 0;
  const exponent = takeOutPower(Math.max(Math.abs(value), half));
  const scaled = (v: number) => v / 10 ** exponent;

  if (half === 0) {
    const digits = input.digits ?? 3;
    const shown = scaled(value);
    const place = shown === 0 ? 0 : exponentOf(Number(shown.toPrecision(digits))) - digits + 1;
    return { value: roundedAt(shown, Math.min(0, place)), uncertainty: null, range: null, exponent };
  }
  // A value outside its own interval can't be printed as value and half width.
  const lopsided = hasInterval && Math.max(up, down) > LOPSIDED_RATIO * Math.min(up, down);
  if (lopsided && hasInterval) {
    const inside = Math.min(up, down) > 0 ? Math.min(up, down) : half;
    const place = lastPlace(scaled(inside));
    const at = (v: number) => roundedAt(scaled(v), place);
    return { value: at(value), uncertainty: null, range: { low: at(low), high: at(high) }, exponent };
  }
  const place = lastPlace(scaled(half));
  return {
    value: roundedAt(scaled(value), place),
    uncertainty: roundedAt(scaled(half), place),
    range: null,
    exponent,
  };
}

/** The same as one string, for labels and titles: `1.21 ± 0.18 mm/s`; `not measured` when unknown. */
export function quantityText(input: QuantityInput & { unit?: string }): string {
  const text = formatQuantity(input);
  if (!text) return 'not measured';
  const number = text.uncertainty
    ? `${text.value} ± ${text.uncertainty}`
    : text.range
      ? `${text.value} (${text.range.low} to ${text.range.high})`
      : text.value;
  const power = text.exponent === 0 ? '' : ` × 10^${text.exponent}`;
  return `${number}${power}${input.unit ? ` ${input.unit}` : ''}`;
}
