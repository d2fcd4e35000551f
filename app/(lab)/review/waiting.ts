import { cache } from 'react';
import { may, type Viewer } from '@/auth/viewer';
import { reviewCounts } from '@/models/queries/review-sets';

/** Candidates and disagreements that wait for this person; looked up once per request. */
export const reviewWaits = cache(async (labId: string, userId: string) => reviewCounts(labId, userId));

/** How much of it is theirs to do. */
export async function waitingForReview(viewer: Viewer): Promise<number> {
  const [judges, settles] = [may(viewer, 'review'), may(viewer, 'settle')];
  if (!judges && !settles) return 0;
  const { waiting, disagreed } = await reviewWaits(viewer.labId, viewer.userId);
  return (judges ? waiting : 0) + (settles ? disagreed : 0);
}
