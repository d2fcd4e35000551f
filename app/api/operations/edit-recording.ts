import { assertMayTo, type Viewer } from '@/auth/viewer';
import { enqueueIngest } from '@/jobs/ingest-recording';
import { LabError } from '@/lib/errors';
import type { RecordingPatch } from '@/lib/schemas/recording';
import type { RecordingView } from '@/lib/views/recording-view';
import { getSequelize } from '@/models/database';
import { changeRow, type Change } from '@/models/queries/change-row';
import { getRecording, makersOfRecording } from '@/models/queries/recordings';

/**
 * Renames a recording, or answers the refusal of its stack: so many pages of it, or one channel. An
 * answer has the stack checked anew.
 * @throws StaleRevisionError; LabError STATE where no such choice is open, PARAM_RANGE outside it.
 */
export async function editRecording(
  viewer: Viewer,
  recordingId: string,
  ifMatch: number[] | null,
  patch: RecordingPatch,
): Promise<RecordingView> {
  const { labId } = viewer;
  const change: Change = { labId, id: recordingId, ifMatch };
  assertMayTo(viewer, 'edit-recording', await makersOfRecording(labId, recordingId));
  const current = () => getRecording(labId, recordingId);
  const choice = patch.usePages !== undefined || patch.channel !== undefined;
  if (choice) assertOffered(await current(), patch);
  await getSequelize().transaction(async (transaction) => {
    const values: Record<string, unknown> = {
      name: patch.name,
      use_pages: patch.usePages,
      channel: patch.channel === undefined ? undefined : String(patch.channel),
    };
    if (choice) Object.assign(values, { state: 'checking', refusal: null, warnings: '[]' });
    await changeRow('recordings', change, values, current, transaction);
    if (choice) await enqueueIngest({ recordingId, labId }, transaction);
  });
  return current();
}

function assertOffered({ state, refusal }: RecordingView, { usePages, channel }: RecordingPatch): void {
  if (state !== 'refused' || !refusal) {
    throw new LabError('STATE', `There is nothing to choose: the recording is ${state}.`);
  }
  if (usePages !== undefined && !(refusal.usePages && usePages <= refusal.usePages)) {
    const detail = refusal.usePages
      ? `usePages must be at most ${refusal.usePages}, the intact pages. Received ${usePages}.`
      : 'This stack can not be used in part.';
    throw new LabError('PARAM_RANGE', detail, { errors: [{ path: 'usePages', message: detail }] });
  }
  if (channel !== undefined && !(refusal.channels && (channel === 'mean' || channel < refusal.channels))) {
    const detail = refusal.channels
      ? `channel must be "mean" or a number from 0 to ${refusal.channels - 1}.`
      : 'This stack has no channels to choose from.';
    throw new LabError('PARAM_RANGE', detail, { errors: [{ path: 'channel', message: detail }] });
  }
}
