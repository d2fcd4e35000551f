import { editRecording } from '@/app/api/operations/edit-recording';
import { removeThing } from '@/app/api/operations/remove';
import { done } from '@/auth/answer';
import { may } from '@/auth/viewer';
import { recordingMetadata } from '@/lib/views/metadata-only';
import { getRecording } from '@/models/queries/recordings';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /recordings/{recordingId}', async ({ viewer, params }) => {
    const recording = await getRecording(viewer.labId, params.recordingId);
    return may(viewer, 'see-data') ? recording : recordingMetadata(recording);
  }),
  PATCH: memberRoute('PATCH /recordings/{recordingId}', ({ viewer, params, body, ifMatch }) =>
    editRecording(viewer, params.recordingId, ifMatch, body),
  ),
  DELETE: memberRoute('DELETE /recordings/{recordingId}', async ({ viewer, params }) => {
    await removeThing(viewer, 'recording', params.recordingId);
    return done();
  }),
});
