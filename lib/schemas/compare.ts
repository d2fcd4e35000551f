import { z } from 'zod';
import { checkRanges, selectionFields } from './selection';

/** Ways to the line density that runs can be compared by. */
export const COMPARED_METHODS = [
  'combined',
  'crossings',
  'neighbour-distance',
  'beads-per-length',
  'line-velocity',
  'free-path',
  'visible-length',
] as const;

const method = z
  .enum(COMPARED_METHODS, `method must be one of ${COMPARED_METHODS.join(', ')}.`)
  .default('combined');

/** What is compared: the selection, and the method that gives the line density of plot and fit. */
export const compareQuery = z.strictObject({ ...selectionFields, method }).superRefine(checkRanges);
export type CompareQuery = z.output<typeof compareQuery>;

export const POOLED_POPULATIONS = ['trapped', 'free', 'undecided', 'all'] as const;
export const POOLED_COMPONENTS = ['along', 'across', 'x', 'y', 'speed'] as const;
/** Scales that velocities of different runs are brought to. */
export const POOLED_SCALES = ['none', 'deviation', 'kappa-over-spacing'] as const;

export const pooledPdfQuery = z
  .strictObject({
    ...selectionFields,
    population: z
      .enum(POOLED_POPULATIONS, `population must be one of ${POOLED_POPULATIONS.join(', ')}.`)
      .default('all'),
    component: z
      .enum(POOLED_COMPONENTS, `component must be one of ${POOLED_COMPONENTS.join(', ')}.`)
      .default('across'),
    /** Of each run the distribution at the lag next to this one; at its shortest where none is named. */
    lag_s: z.coerce
      .number('lag_s must be a time in seconds.')
      .positive('lag_s must be above 0 s.')
      .max(1e4)
      .optional(),
    scale: z.enum(POOLED_SCALES, `scale must be one of ${POOLED_SCALES.join(', ')}.`).default('none'),
  })
  .superRefine(checkRanges);
export type PooledPdfQuery = z.output<typeof pooledPdfQuery>;

export const courseQuery = z.strictObject(selectionFields).superRefine(checkRanges);
