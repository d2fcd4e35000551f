import type { Transaction } from 'sequelize';
import { z } from 'zod';
import { recipeRequestSchema } from '@/lib/schemas/recipe';
import { defineJob } from './job-definition';
import { enqueueJob } from './queue';

const payload = z.object({
  /** Start an analysis in the same breath, once the stack has been found good. */
  analyseWhenReady: z.object({ recipe: recipeRequestSchema, userId: z.uuid().nullable() }).optional(),
});
export type IngestPayload = z.infer<typeof payload>;

/** Checks a stack whose bytes have arrived, indexes its frames, measures its pictures, makes previews. */
export const ingestRecordingJob = defineJob<IngestPayload>({
  kind: 'ingest-recording',
  subject: 'recording',
  maxAttempts: 3,
  payload,
});

/** Asks for the check of a recording in state `checking`; asking again while it runs changes nothing. */
export function enqueueIngest(
  request: { recordingId: string; labId: string } & IngestPayload,
  transaction: Transaction,
): Promise<string | null> {
  const { recordingId, labId, ...rest } = request;
  return enqueueJob(ingestRecordingJob, { labId, subjectId: recordingId, payload: rest }, transaction);
}
