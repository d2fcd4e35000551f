import type { Viewer } from '@/auth/viewer';
import type { AnalysisView } from '@/lib/views/analysis-view';
import { getSequelize } from '@/models/database';
import { getAnalysis } from '@/models/queries/analyses';
import { signOff } from '@/models/queries/sign-off';
import { StaleRevisionError } from '@/models/queries/stale-revision';
import { writeAudit } from '@/models/queries/write-audit';

/** Freezes an analysis for good. @throws LabError NOT_FOUND, STATE; StaleRevisionError */
export async function signOffAnalysis(
  { labId, userId }: Viewer,
  analysisId: string,
  ifMatch: number[] | null,
): Promise<AnalysisView> {
  const hash = await getSequelize().transaction(async (transaction) => {
    const signed = await signOff({ labId, analysisId, userId, ifMatch }, transaction);
    if (signed === null) return null;
    const subject = { subjectKind: 'analysis', subjectId: analysisId };
    await writeAudit(
      { labId, userId, action: 'analysis.signed-off', ...subject, detail: { contentHash: signed } },
      transaction,
    );
    return signed;
  });
  const analysis = await getAnalysis(labId, analysisId);
  if (hash === null) throw new StaleRevisionError(analysis);
  return analysis;
}
