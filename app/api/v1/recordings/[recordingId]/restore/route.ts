import { restoreThing } from '@/app/api/operations/remove';
import { getRecording } from '@/models/queries/recordings';
import { may } from '@/auth/viewer';
import { recordingMetadata } from '@/lib/views/metadata-only';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /recordings/{recordingId}/restore', async ({ viewer, params }) => {
    await restoreThing(viewer, 'recording', params.recordingId);
    const recording = await getRecording(viewer.labId, params.recordingId);
    return may(viewer, 'see-data') ? recording : recordingMetadata(recording);
  }),
});
