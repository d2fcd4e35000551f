import type { Transaction } from 'sequelize';
import type { ImageQuality } from '@/lib/recording-facts';
import { models } from '@/models';
import type { Recording } from '@/models/recording';
import { conditionsOfRun } from '@/models/queries/run-conditions';
import type { ReadyStack, StackReport } from '@/stacks/stack-report';
import { ingestRecordingJob, type IngestPayload } from './ingest-recording';
import { sourceOf } from './ingest-source';
import type { JobHandler } from './job-context';
import { CHECK_TIMEOUT_MS } from './job-timeouts';
import { stackFolder } from './stack-folder';
import { removeStack, withLocalStack } from './stack-store';
import { startAnalysis } from './start-analysis';

export const ingestRecordingHandler: JobHandler<IngestPayload> = {
  definition: ingestRecordingJob,
  async run({ claim, payload, signal, compute, report, commit }) {
    const { labId, subjectId: recordingId } = claim;
    const recording = await models().Recording.findOne({ where: { id: recordingId, labId } });
    if (!recording || recording.state !== 'checking') return commit(async () => undefined);
    const { source, expectedSha256 } = await sourceOf(recording);
    const outDir = stackFolder(recordingId);
    const scale = await scaleOf(recording);
    const check = () =>
      compute(
        'inspectStack',
        {
          source,
          outDir,
          expectedSha256,
          usePages: recording.usePages ?? undefined,
          channel: channelOf(recording.channel),
          scale,
          previews: true,
        },
        { onProgress: report, timeoutMs: CHECK_TIMEOUT_MS },
      );
    const keep = ({ state }: StackReport) => state === 'ready';
    const stack = await withLocalStack(recordingId, check, { keep, signal });
    await commit(async (transaction) => {
      if (stack.state === 'refused') await saveRefusal(recording, stack, transaction);
      else {
        await saveReady(recording, stack, transaction);
        if (payload.analyseWhenReady)
          await startFirstAnalysis(recording, payload.analyseWhenReady, transaction);
      }
    });
    // Only once the refusal stands: a crash in between leaves bytes, never a ready recording without them.
    if (stack.state === 'refused' && !stack.refusal.offer) await removeStack(recordingId);
  },
  async onGivenUp({ subjectId, labId }, { detail }, transaction) {
    await models().Recording.update(
      { state: 'refused', refusal: { code: 'CHECK_FAILED', detail } },
      { where: { id: subjectId, labId, state: 'checking' }, transaction },
    );
  },
};

async function scaleOf({ runId, labId }: Recording) {
  const run = await models().Run.findOne({ where: { id: runId, labId } });
  const conditions = run && conditionsOfRun(run);
  return conditions
    ? { pixelSizeM: conditions.pixelSize_m, frameIntervalS: conditions.frameInterval_s }
    : undefined;
}

function channelOf(channel: string | null): number | 'mean' | undefined {
  if (channel === null) return undefined;
  return channel === 'mean' ? 'mean' : Number(channel);
}

async function saveRefusal(
  recording: Recording,
  { refusal: { code, detail, offer } }: Extract<StackReport, { state: 'refused' }>,
  transaction: Transaction,
): Promise<void> {
  await recording.update(
    { state: 'refused', refusal: { code, detail, ...offer }, revision: recording.revision + 1 },
    { transaction },
  );
}

async function saveReady(recording: Recording, stack: ReadyStack, transaction: Transaction): Promise<void> {
  const { frames, width, height, bitDepth, sha256, warnings, metadata } = stack;
  await recording.update(
    {
      state: 'ready',
      frames,
      width,
      height,
      bitDepth,
      sha256,
      warnings,
      metadata,
      imageQuality: qualityOf(stack),
      refusal: null,
      revision: recording.revision + 1,
    },
    { transaction },
  );
}

function qualityOf({ imageQuality: q }: ReadyStack): ImageQuality {
  const last = q.drift.frames.length - 1;
  const [x, y] = [q.drift.xPx[last], q.drift.yPx[last]];
  return {
    noiseCounts: q.noiseCounts ?? 0,
    saturatedShare: q.saturatedShare,
    driftPx: typeof x === 'number' && typeof y === 'number' ? { x, y } : null,
    brightness: { frame: q.brightness.frames, meanCounts: q.brightness.meanCounts },
    low: q.contrast.low,
    high: q.contrast.high,
  };
}

async function startFirstAnalysis(
  recording: Recording,
  { recipe, userId }: NonNullable<IngestPayload['analyseWhenReady']>,
  transaction: Transaction,
): Promise<void> {
  const { labId, runId } = recording;
  const run = await models().Run.findOne({ where: { id: runId, labId }, transaction });
  const conditions = run && conditionsOfRun(run);
  // Without pixel size and frame interval nothing can be measured; a person starts it once they are known.
  if (!conditions) return;
  await startAnalysis({ labId, recording, conditions, recipeRequest: recipe, userId }, transaction);
}
