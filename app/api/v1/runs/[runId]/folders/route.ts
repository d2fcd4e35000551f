import { memberRoute, methods } from '@/app/api/member-route';
import { assertDiskHasRoom, assertFileSize } from '@/app/api/uploads/room-for';
import { Answer } from '@/auth/answer';
import { assertNotDeleted } from '@/models/queries/change-row';
import { assertTakes } from '@/models/queries/rehearsal-mark';
import { getRun } from '@/models/queries/runs';
import { createFolder } from '@/models/queries/uploads';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /runs/{runId}/folders', async ({ viewer, params, body }) => {
    assertNotDeleted(await getRun(viewer.labId, params.runId), 'run');
    await assertTakes(viewer.labId, { runId: params.runId });
    assertFileSize(body.bytes);
    await assertDiskHasRoom(body.bytes);
    return new Answer(await createFolder(viewer, params.runId, body), 201);
  }),
});
