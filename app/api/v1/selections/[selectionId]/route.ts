import { done } from '@/auth/answer';
import { assertMayTo } from '@/auth/viewer';
import { memberRoute, methods } from '@/app/api/member-route';
import { changeSelection, getSelection, removeSelection, selectionMaker } from '@/models/queries/saved-selections'; // prettier-ignore

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /selections/{selectionId}', ({ viewer, params }) =>
    getSelection(viewer.labId, params.selectionId),
  ),
  PATCH: memberRoute('PATCH /selections/{selectionId}', async ({ viewer, params, body, ifMatch }) => {
    assertMayTo(viewer, 'edit-selection', [await selectionMaker(viewer.labId, params.selectionId)]);
    const { labId, userId } = viewer;
    return changeSelection({ labId, userId, id: params.selectionId, ifMatch }, body);
  }),
  DELETE: memberRoute('DELETE /selections/{selectionId}', async ({ viewer, params }) => {
    assertMayTo(viewer, 'edit-selection', [await selectionMaker(viewer.labId, params.selectionId)]);
    await removeSelection(viewer, params.selectionId);
    return done();
  }),
});
