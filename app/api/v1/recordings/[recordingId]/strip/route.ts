import { memberRoute, methods } from '@/app/api/member-route';
import { shownRecording } from '@/app/api/stacks/frame-picture';
import { stripFile } from '@/jobs/stack-folder';
import { readStackFile } from '@/jobs/stack-store';
import { LabError } from '@/lib/errors';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /recordings/{recordingId}/strip', async ({ viewer, params }) => {
    const recording = await shownRecording(viewer.labId, params.recordingId);
    const picture = await readStackFile(recording.id, stripFile(recording.id)).catch((cause: unknown) => {
      throw new LabError('NOT_COMPUTED', 'There is no strip of this recording.', { cause });
    });
    return new Response(new Uint8Array(picture), {
      headers: {
        'Content-Type': 'image/png',
        'Cache-Control': 'private, max-age=86400',
        Vary: 'Authorization, Cookie',
      },
    });
  }),
});
