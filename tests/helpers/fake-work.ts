import { z } from 'zod';
import type { JobContext, JobHandler } from '@/jobs/job-context';
import { defineJob, type JobDefinition } from '@/jobs/job-definition';
import { enqueueJob, enqueueJobs } from '@/jobs/queue';
import { getSequelize } from '@/models/database';
import { models } from '@/models';
import { failAnalysis } from '@/models/queries/analysis-progress';
import type { JobRun } from '@/models/job-run';

type Payload = Record<string, unknown>;

/** Work of a made-up kind, for tests of how work is handed out, whatever it is. */
export const fakeJob: JobDefinition<Payload> = defineJob({
  kind: 'fake-work',
  subject: 'analysis',
  maxAttempts: 3,
  payload: z.record(z.string(), z.unknown()),
});

/** A registry in which the made-up work is done by `run`. */
export function fakeHandlers(run: (context: JobContext<Payload>) => Promise<void>): Map<string, JobHandler> {
  const handler: JobHandler = {
    definition: fakeJob,
    run,
    onGivenUp: ({ subjectId }, reason, transaction) => failAnalysis(subjectId, reason, transaction),
  };
  return new Map([[fakeJob.kind, handler]]);
}

/** Asks for the made-up work in a transaction of its own. @returns the row's id */
export async function askForFakeWork(
  { id, labId }: { id: string; labId: string },
  payload: Payload = {},
): Promise<string> {
  const jobId = await getSequelize().transaction((transaction) =>
    enqueueJob(fakeJob, { labId, subjectId: id, payload }, transaction),
  );
  if (!jobId) throw new Error('The work was there already.');
  return jobId;
}

/** Asks for many pieces of the made-up work at once, with one bell for all. @returns the rows' ids */
export async function askForFakeWorks(
  { id, labId }: { id: string; labId: string },
  pieces: number,
): Promise<string[]> {
  const requests = Array.from({ length: pieces }, (_, chunk) => ({
    labId,
    subjectId: id,
    chunk,
    payload: {},
  }));
  await getSequelize().transaction((transaction) => enqueueJobs(fakeJob, requests, transaction));
  const rows = await models().JobRun.findAll({ where: { subjectId: id, kind: fakeJob.kind } });
  return rows.map((row) => row.id);
}

export async function jobRow(id: string): Promise<JobRun> {
  const row = await models().JobRun.findByPk(id);
  if (!row) throw new Error(`There is no job ${id}.`);
  return row;
}
