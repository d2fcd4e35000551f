import { nthElement } from '../nth-element';

/** Median of the square of a standard normal value. */
export const MEDIAN_OF_SQUARE = 0.4549364;

/** Upper median of the first `count` values, >= 1; their order in the array changes. */
export const medianOf = (values: Float64Array, count: number): number =>
  nthElement(values, count, count >> 1);
