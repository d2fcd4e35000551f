import { may, type Viewer } from '@/auth/viewer';
import { afterVerdict, tellOfAssignment } from '@/jobs/tell-of-review';
import { baseUrl } from '@/lib/env';
import type { AssignmentInput, SettlementInput, VerdictInput } from '@/lib/schemas/review';
import type { AssignmentView, OwnVerdictView, ReadingsView } from '@/lib/views/review-view';
import { getSequelize } from '@/models/database';
import { assignReview, takeBackAssignment } from '@/models/queries/assignments';
import type { Sight } from '@/models/queries/candidate-sight';
import { readingsOf, settle } from '@/models/queries/settlements';
import { giveVerdict, ownVerdict } from '@/models/queries/verdicts';

/** Through whose eyes candidates are read. Who downloads tables sees outcomes there anyway; readers see none. */
export const sightOf = (viewer: Viewer): Sight & { mayReview: boolean } => ({
  userId: viewer.userId,
  seesOutcomes: may(viewer, 'download-tables') || may(viewer, 'settle') || !may(viewer, 'review'),
  mayReview: may(viewer, 'review'),
});

/** Stores a verdict and all that follows from it, or nothing. */
export async function judge(
  viewer: Viewer,
  candidateId: string,
  ifMatch: number[] | null,
  input: VerdictInput,
): Promise<OwnVerdictView> {
  const { labId, userId } = viewer;
  return getSequelize().transaction(async (transaction) => {
    const given = await giveVerdict(labId, candidateId, sightOf(viewer), ifMatch, input, transaction);
    await afterVerdict(labId, userId, given, transaction);
    return given.own;
  });
}

/** The principal investigator's word. */
export async function settleCandidate(
  viewer: Viewer,
  candidateId: string,
  input: SettlementInput,
): Promise<ReadingsView> {
  await getSequelize().transaction((transaction) => settle(viewer, candidateId, input, transaction));
  return readingsOf(viewer.labId, candidateId, null);
}

/** What was said of a candidate; somebody who still has to judge it hears only of themselves. */
export async function seeReadings(viewer: Viewer, candidateId: string): Promise<ReadingsView> {
  const { labId, userId } = viewer;
  if (!may(viewer, 'review')) return readingsOf(labId, candidateId, null);
  const own = await ownVerdict(labId, candidateId, sightOf(viewer));
  const blind = own.verdict === null && own.review === 'open';
  return readingsOf(labId, candidateId, blind ? userId : null);
}

export async function assign(viewer: Viewer, input: AssignmentInput): Promise<AssignmentView> {
  return getSequelize().transaction(async (transaction) => {
    const assignment = await assignReview(viewer, input, transaction);
    await tellOfAssignment(viewer.labId, assignment, baseUrl(), transaction);
    return assignment;
  });
}

export const takeBack = (viewer: Viewer, assignmentId: string): Promise<void> =>
  getSequelize().transaction((transaction) => takeBackAssignment(viewer, assignmentId, transaction));
