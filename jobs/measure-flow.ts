import { z } from 'zod';
import { defineJob } from './job-definition';

/** Measures populations, velocities, reconnections and estimates from the tracks. */
export const measureFlowJob = defineJob({
  kind: 'measure-flow',
  subject: 'analysis',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});
