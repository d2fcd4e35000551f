import { memberRoute, methods } from '@/app/api/member-route';
import { trackWindowView } from '@/app/api/track-window-view';
import { notFound } from '@/lib/errors';
import { assertTracks } from '@/models/queries/read-results';
import { trackWindow } from '@/models/queries/track-window';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /analyses/{analysisId}/tracks', async ({ viewer, params, query: { from, to } }) => {
    await assertTracks(viewer.labId, params.analysisId);
    const window = await trackWindow(viewer.labId, params.analysisId, from, to);
    if (!window) throw notFound('analysis');
    return trackWindowView(window, from, to);
  }),
});
