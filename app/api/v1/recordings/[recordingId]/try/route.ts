import { computableRecording } from '@/app/api/operations/analyses';
import { tryRecipe } from '@/jobs/try-recipe';
import { LabError } from '@/lib/errors';
import { memberRoute, methods } from '@/app/api/member-route';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /recordings/{recordingId}/try', async ({ viewer, params, body, request }) => {
    const { recording, conditions } = await computableRecording(viewer.labId, params.recordingId);
    const frames = [...new Set(body.frames)].sort((a, b) => a - b);
    const beyond = frames.find((frame) => frame >= (recording.frames ?? 0));
    if (beyond !== undefined) {
      const message = `The recording has frames 0 to ${(recording.frames ?? 0) - 1}. Received ${beyond}.`;
      throw new LabError('PARAM_RANGE', message, { errors: [{ path: 'frames', message }] });
    }
    const recipe = body.recipe ?? {};
    return tryRecipe({ recordingId: recording.id, frames, recipe, conditions }, { signal: request.signal });
  }),
});
