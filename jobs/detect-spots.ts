import { z } from 'zod';
import { defineJob } from './job-definition';

const payload = z.object({ firstFrame: z.int().min(0), frames: z.int().min(1) });
export type DetectSpotsPayload = z.infer<typeof payload>;

/** Finds the spots of one chunk of frames. */
export const detectSpotsJob = defineJob<DetectSpotsPayload>({
  kind: 'detect-spots',
  subject: 'analysis',
  maxAttempts: 3,
  payload,
});
