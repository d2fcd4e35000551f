import type { Transaction } from 'sequelize';
import { z } from 'zod';
import { rehearsalOfAnalysis } from '@/models/queries/rehearsal-work';
import { defineJob } from './job-definition';
import { enqueueJob } from './queue';

/** Compares a finished analysis of a rehearsal's recording with what the recording was made of. */
export const assessRehearsalJob = defineJob({
  kind: 'assess-rehearsal',
  subject: 'analysis',
  maxAttempts: 3,
  payload: z.record(z.string(), z.never()),
});

/** To be called in the transaction that finishes an analysis; asks for nothing where a camera took the recording. */
export async function askForAssessment(analysisId: string, transaction: Transaction): Promise<void> {
  const rehearsal = await rehearsalOfAnalysis(analysisId, transaction);
  if (!rehearsal) return;
  const { labId } = rehearsal;
  await enqueueJob(assessRehearsalJob, { labId, subjectId: analysisId, payload: {} }, transaction);
}
