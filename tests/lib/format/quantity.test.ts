import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { formatQuantity, lastPlace, quantityText, roundedAt } from '@/lib/format/quantity';
import { expectWithin } from '../../helpers/expect-within';

const shown = (value: number, uncertainty: number, siPerUnit = 1) =>
  quantityText({ value, uncertainty, siPerUnit });

describe('quantities in print', () => {
  // Examples written out in the product's rule of rounding: one digit, two if the first is 1.
  it('rounds the uncertainty to one digit, to two when it starts with 1, and the value to the same place', () => {
    expect(shown(1.2134, 0.183)).toBe('1.21 ± 0.18');
    expect(shown(1.52, 0.22)).toBe('1.5 ± 0.2');
    expect(shown(91.4, 7.1)).toBe('91 ± 7');
    expect(shown(27.93, 1.47)).toBe('27.9 ± 1.5');
    expect(shown(-10.21, 1.42)).toBe('\u221210.2 ± 1.4');
  });

  // Worked by hand from the rule.
  it('looks at the first digit after rounding too', () => {
    expect(shown(0.5, 0.096)).toBe('0.50 ± 0.10');
    expect(shown(0.5, 0.0949)).toBe('0.50 ± 0.09');
    expect(shown(0.5, 0.196)).toBe('0.50 ± 0.20');
    expect(shown(12_345, 678)).toBe('12\u2009300 ± 700');
    expect(shown(12_345, 960)).toBe('12\u2009300 ± 1\u2009000');
  });

  it('prints a lopsided interval as its ends and a nearly even one as a half width', () => {
    expect(quantityText({ value: 1.4, low: 0.4, high: 4.6 })).toBe('1.4 (0.4 to 4.6)');
    expect(quantityText({ value: 27, low: 15, high: 48 })).toBe('27 (15 to 48)');
    expect(quantityText({ value: 1.21e8, low: 1.04e8, high: 1.41e8, siPerUnit: 1e8 })).toBe('1.21 ± 0.18');
  });

  it('takes a power of ten out of numbers too large or too small to read', () => {
    expect(formatQuantity({ value: 1.21e8, uncertainty: 0.18e8 })).toEqual({
      value: '1.21',
      uncertainty: '0.18',
      range: null,
      exponent: 8,
    });
    expect(quantityText({ value: 9.97e-8, unit: 'm^2/s' })).toBe('9.97 × 10^-8 m^2/s');
  });

  it('says that an unknown value was not measured, and never prints NaN', () => {
    for (const value of [null, undefined, NaN, Infinity]) {
      expect(formatQuantity({ value })).toBeNull();
      expect(quantityText({ value, unit: 'K' })).toBe('not measured');
    }
    expect(quantityText({ value: 1.5, uncertainty: NaN })).toBe('1.50');
  });

  it('keeps three digits of a value without uncertainty and writes no negative zero', () => {
    expect(quantityText({ value: 0.1093, unit: 'mm/s' })).toBe('0.109 mm/s');
    expect(quantityText({ value: 0 })).toBe('0');
    expect(quantityText({ value: 9.996 })).toBe('10.0');
    expect(shown(-0.001, 0.3)).toBe('0.0 ± 0.3');
  });

  // Oracle: the definition. Half of the last printed place bounds the rounding error of the value.
  it('never moves a value by more than half of the last place printed', () => {
    const positive = fc.double({ min: 1e-3, max: 9e4, noNaN: true });
    fc.assert(
      fc.property(fc.double({ min: -9e4, max: 9e4, noNaN: true }), positive, (value, uncertainty) => {
        const text = formatQuantity({ value, uncertainty })!;
        const number = Number(text.value.replace('\u2212', '-').replaceAll('\u2009', ''));
        const place = lastPlace(uncertainty);
        expectWithin(number, value, { abs: 0.5000001 * 10 ** place + 1e-9 });
        const digits = text.uncertainty!.replaceAll('\u2009', '').replace(/^0\.0*|\./g, '');
        expect(digits).toMatch(/^([2-9]0*|1\d0*|20)$/);
      }),
      { numRuns: 500 },
    );
  });

  it('groups digits in threes by thin spaces from 1000 on', () => {
    expect(roundedAt(13_020, 0)).toBe('13\u2009020');
    expect(roundedAt(-1_234_567.891, -2)).toBe('\u22121\u2009234\u2009567.89');
    expect(roundedAt(999, 0)).toBe('999');
  });
});
