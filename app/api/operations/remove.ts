import type { Viewer } from '@/auth/viewer';
import { assertMayTo } from '@/auth/viewer';
import { getCampaign } from '@/models/queries/campaigns';
import { setDeleted } from '@/models/queries/change-row';
import { makersOfRecording, makersOfRun } from '@/models/queries/recordings';
import { writeAudit } from '@/models/queries/write-audit';

export type Removable = 'campaign' | 'run' | 'recording';

const TABLES = { campaign: 'campaigns', run: 'runs', recording: 'recordings' } as const;

async function makersOf(labId: string, kind: Removable, id: string): Promise<(string | null)[]> {
  if (kind === 'run') return makersOfRun(labId, id);
  if (kind === 'recording') return makersOfRecording(labId, id);
  return [(await getCampaign(labId, id)).createdBy?.id ?? null];
}

/** Removes a campaign, run or recording: hidden, and restored with everything that is in it. */
export async function removeThing(viewer: Viewer, kind: Removable, id: string): Promise<void> {
  assertMayTo(viewer, 'remove', await makersOf(viewer.labId, kind, id));
  await setDeleted(TABLES[kind], { labId: viewer.labId, id }, true);
  await note(viewer, kind, id, 'removed');
}

export async function restoreThing(viewer: Viewer, kind: Removable, id: string): Promise<void> {
  assertMayTo(viewer, 'restore', await makersOf(viewer.labId, kind, id));
  await setDeleted(TABLES[kind], { labId: viewer.labId, id }, false);
  await note(viewer, kind, id, 'restored');
}

const note = ({ labId, userId }: Viewer, kind: Removable, id: string, what: string) =>
  writeAudit({ labId, userId, action: `${kind}.${what}`, subjectKind: kind, subjectId: id });
