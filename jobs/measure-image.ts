import { z } from 'zod';
import { defineJob } from './job-definition';

/** Measures camera and spot size, fills in the recipe, cuts the stack into chunks. */
export const measureImageJob = defineJob({
  kind: 'measure-image',
  subject: 'analysis',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});
