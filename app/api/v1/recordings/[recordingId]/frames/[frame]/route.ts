import { memberRoute, methods } from '@/app/api/member-route';
import { framePicture, shownRecording } from '@/app/api/stacks/frame-picture';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute(
    'GET /recordings/{recordingId}/frames/{frame}',
    async ({ request, viewer, params, query }) =>
      framePicture(request, await shownRecording(viewer.labId, params.recordingId), params.frame, query),
  ),
});
