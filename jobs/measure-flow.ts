import { z } from 'zod';
import { FLOW_PARTS } from '@/tracking/flow-parts';
import { defineJob } from './job-definition';

/** Tracks are named first; then the parts may be measured in any order, by as many workers. */
export const FLOW_STEPS = ['populations', ...FLOW_PARTS] as const;

const payload = z.object({ part: z.enum(FLOW_STEPS).default('populations') });
export type MeasureFlowPayload = z.infer<typeof payload>;

/** Measures populations, velocities, reconnections and estimates from the tracks: one piece of work for each part. */
export const measureFlowJob = defineJob<MeasureFlowPayload>({
  kind: 'measure-flow',
  subject: 'analysis',
  maxAttempts: 3,
  payload,
});
