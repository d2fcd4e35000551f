import type { Transaction } from 'sequelize';
import { codeVersion } from '@/lib/env';
import { LabError, notFound } from '@/lib/errors';
import { getSequelize } from '@/models/database';
import { models } from '@/models';
import { reviveExport } from '@/models/queries/exports';
import { setMailState } from '@/models/queries/mails';
import { rehearsalOfAnalysis, setRehearsalState } from '@/models/queries/rehearsal-work';
import { requeueJob, requeueJobsOf, type JobState } from '@/models/queries/requeue-jobs';
import { selectRow } from '@/models/queries/select';
import { buildExportJob } from './build-export';
import { assessRehearsalJob } from './assess-rehearsal';
import { checkFilesJob } from './check-files';
import { composeStripsJob } from './compose-strips';
import { detectSpotsJob } from './detect-spots';
import { ring } from './doorbell';
import { ingestRecordingJob } from './ingest-recording';
import { lockSubject } from './job-context';
import type { JobDefinition } from './job-definition';
import { linkTracksJob } from './link-tracks';
import { measureFlowJob } from './measure-flow';
import { measureImageJob } from './measure-image';
import { remeasureTracksJob } from './remeasure-tracks';
import { sendMailJob } from './send-mail';
import { simulateRehearsalJob } from './simulate-rehearsal';

type Known = Pick<JobDefinition, 'kind' | 'subject' | 'maxAttempts'>;
const DEFINITIONS: readonly Known[] = [
  ingestRecordingJob,
  measureImageJob,
  detectSpotsJob,
  linkTracksJob,
  measureFlowJob,
  remeasureTracksJob,
  sendMailJob,
  checkFilesJob,
  composeStripsJob,
  buildExportJob,
  simulateRehearsalJob,
  assessRehearsalJob,
];

/** Work for an analysis that is done: it fails alone and is asked for again alone. */
const BESIDE: ReadonlySet<string> = new Set([composeStripsJob.kind, assessRehearsalJob.kind]);

interface Row {
  id: string;
  kind: string;
  subject_id: string;
  state: JobState;
  waits: boolean;
}

/**
 * Asks again for work that failed, or at once for work that waits for its next try. What it was asked to do stays as
 * it was, and so does what was finished of it.
 * @throws LabError NOT_FOUND, STATE for work that neither failed nor waits for a try, or whose subject can't go on
 */
export async function runAgain(
  labId: string,
  jobId: string,
  then: (job: { kind: string; subjectId: string }, transaction: Transaction) => Promise<void>,
): Promise<void> {
  await getSequelize().transaction(async (transaction) => {
    const found = await findJob(labId, jobId, '', transaction);
    const definition = DEFINITIONS.find(({ kind }) => kind === found?.kind);
    if (!found || !definition) throw notFound('job');
    await lockSubject(definition.subject, found.subject_id, transaction);
    const job = (await findJob(labId, jobId, 'FOR UPDATE', transaction))!;
    if (job.state !== 'failed' && !job.waits) {
      throw new LabError('STATE', `This work is ${job.state}: only work that failed can be run again.`);
    }
    const alone = BESIDE.has(job.kind);
    if (job.state === 'failed' && !alone) await revive(definition, labId, job.subject_id, transaction);
    if (job.state === 'failed' && job.kind === assessRehearsalJob.kind) {
      const rehearsal = await rehearsalOfAnalysis(job.subject_id, transaction);
      if (rehearsal) await reviveRehearsal(rehearsal.id, transaction);
    }
    if (definition.subject === 'analysis' && job.state === 'failed' && !alone) {
      await requeueJobsOf(job.subject_id, definition.maxAttempts, transaction);
    } else await requeueJob(job.id, definition.maxAttempts, transaction);
    await ring(job.id, transaction);
    await then({ kind: job.kind, subjectId: job.subject_id }, transaction);
  });
}

const findJob = (labId: string, jobId: string, lock: string, transaction: Transaction) =>
  selectRow<Row>(
    `SELECT id, kind, subject_id, state, state = 'waiting' AND not_before > now() AS waits
     FROM job_runs WHERE lab_id = $1 AND id = $2 ${lock}`,
    [labId, jobId],
    transaction,
  );

/** Brings the locked subject of failed work back to where the work can go on. */
async function revive(
  { kind, subject }: Known,
  labId: string,
  subjectId: string,
  transaction: Transaction,
): Promise<void> {
  if (subject === 'mail') return setMailState(subjectId, 'waiting', transaction);
  if (subject === 'export') return reviveExport(subjectId, transaction);
  if (subject === 'rehearsal') return reviveRehearsal(subjectId, transaction);
  if (subject === 'recording') return reviveRecording(labId, subjectId, transaction);
  // New measures of a finished analysis: it did not fail with them.
  if (kind === remeasureTracksJob.kind) return;
  if (subject === 'analysis') return reviveAnalysis(labId, subjectId, transaction);
}

const reviveRehearsal = (id: string, transaction: Transaction) =>
  setRehearsalState(id, 'running', { from: ['failed'], transaction });

async function reviveRecording(labId: string, id: string, transaction: Transaction): Promise<void> {
  const recording = await models().Recording.findOne({ where: { id, labId }, transaction });
  if (recording?.state !== 'refused' || recording.refusal?.code !== 'CHECK_FAILED') {
    throw new LabError('STATE', 'The recording has been dealt with since.');
  }
  await recording.update(
    { state: 'checking', refusal: null, revision: recording.revision + 1 },
    { transaction },
  );
}

async function reviveAnalysis(labId: string, id: string, transaction: Transaction): Promise<void> {
  const analysis = await models().Analysis.findOne({
    where: { id, labId },
    attributes: { exclude: ['imageModel'] },
    transaction,
  });
  if (analysis?.state !== 'failed') throw new LabError('STATE', 'The analysis has not failed.');
  // Results of one analysis come from one version of the code.
  if (analysis.codeVersion !== codeVersion()) {
    throw new LabError('STATE', 'The program has changed since. Start a new analysis of the recording.');
  }
  await analysis.update(
    {
      state: 'waiting',
      errorCode: null,
      errorDetail: null,
      finishedAt: null,
      revision: analysis.revision + 1,
    },
    { transaction },
  );
}
