import type { Transaction } from 'sequelize';
import { z } from 'zod';
import { defineJob } from './job-definition';
import { enqueueJob } from './queue';

/** Composes the strips of an analysis' candidates that are not there yet, then tells of disagreements. */
export const composeStripsJob = defineJob({
  kind: 'compose-strips',
  subject: 'analysis',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});

/** Asks for the strips; asked for again while that waits or runs, it is the same work. */
export const askForStrips = (
  labId: string,
  analysisId: string,
  transaction: Transaction,
): Promise<string | null> =>
  enqueueJob(composeStripsJob, { labId, subjectId: analysisId, payload: {} }, transaction);
