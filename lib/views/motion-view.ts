import { z } from 'zod';

const numberOrNull = z.number().nullable();
const population = z.enum(['trapped', 'free', 'undecided', 'all']);
const ratio = z.object({ lnRatio: z.number(), pEqual: z.number() }).nullable();

/** Spreading, memory and tails of velocities, as the analysis page plots them. */
export const motionViewSchema = z.object({
  displacements: z.array(
    z.object({
      population,
      component: z.enum(['x', 'y', 'along', 'across', 'total']),
      lag_s: z.array(z.number()),
      value_m2: z.array(z.number()),
      low_m2: z.array(numberOrNull),
      high_m2: z.array(numberOrNull),
      noise_m2: numberOrNull,
      tracks: z.int(),
      exponent: z.object({ value: z.number(), low: numberOrNull, high: numberOrNull }).nullable(),
    }),
  ),
  autocorrelations: z.array(
    z.object({
      population,
      component: z.enum(['x', 'y', 'along', 'across']),
      lag_s: z.array(z.number()),
      value: z.array(z.number()),
      low: z.array(numberOrNull),
      high: z.array(numberOrNull),
      variance_m2_s2: z.number(),
      memory_s: numberOrNull,
      tracks: z.int(),
    }),
  ),
  tails: z.array(
    z.object({
      population,
      component: z.enum(['x', 'y', 'along', 'across', 'speed']),
      lag_s: z.number(),
      lagFrames: z.int(),
      meanPath_m: z.number(),
      samples: z.int(),
      tailSamples: z.int(),
      tailTracks: z.int(),
      exponent: numberOrNull,
      exponentLow: numberOrNull,
      exponentHigh: numberOrNull,
      from_m_s: numberOrNull,
      gaussian: ratio,
      logNormal: ratio,
      verdict: z.enum(['power law', 'Gaussian', 'log-normal', 'the data cannot tell', 'too few samples']),
    }),
  ),
});
export type MotionView = z.infer<typeof motionViewSchema>;
