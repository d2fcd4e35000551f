import type { Transaction } from 'sequelize';
import { z } from 'zod';
import { getSequelize } from '@/models/database';
import { labsToCheck } from '@/models/queries/file-checks';
import { defineJob } from './job-definition';
import { enqueueJob } from './queue';

/** A little less than a day, so that the hour of the night does not wander. */
const EVERY_HOURS = 23;
/** From midnight on, by the clock of the web server. */
const NIGHT_HOURS = 6;
/** A server that is off at night checks by day after so long. */
const LATEST_HOURS = 72;

const payload = z.object({ sampleBytes: z.number().positive() });
export type CheckFilesPayload = z.infer<typeof payload>;

/** Reads a sample of a laboratory's stored files again and compares their SHA-256 with that of their arrival. */
export const checkFilesJob = defineJob<CheckFilesPayload>({
  kind: 'check-files',
  subject: 'lab',
  maxAttempts: 3,
  payload,
});

/** @returns null where a check waits or runs already */
export const askForFileCheck = (
  labId: string,
  sampleBytes: number,
  transaction: Transaction,
): Promise<string | null> =>
  enqueueJob(checkFilesJob, { labId, subjectId: labId, payload: { sampleBytes } }, transaction);

/** Asks at night for the check of every laboratory that had none since yesterday. @returns how many were asked for */
export async function askForNightlyChecks(now: Date, sampleBytes: number): Promise<number> {
  const labs = await labsToCheck(now.getHours() < NIGHT_HOURS ? EVERY_HOURS : LATEST_HOURS);
  for (const labId of labs) {
    await getSequelize().transaction((transaction) => askForFileCheck(labId, sampleBytes, transaction));
  }
  return labs.length;
}
