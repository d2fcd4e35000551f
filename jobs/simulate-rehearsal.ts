import { z } from 'zod';
import { defineJob } from './job-definition';

/** Makes the frames of a rehearsal and hands them over as a recording that has arrived. */
export const simulateRehearsalJob = defineJob({
  kind: 'simulate-rehearsal',
  subject: 'rehearsal',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});
