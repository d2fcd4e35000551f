import { z } from 'zod';
import { defineJob } from './job-definition';

/** Joins the spots of all chunks into tracks. */
export const linkTracksJob = defineJob({
  kind: 'link-tracks',
  subject: 'analysis',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});
