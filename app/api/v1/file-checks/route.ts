import { memberRoute, methods } from '@/app/api/member-route';
import { Answer } from '@/auth/answer';
import { askForFileCheck } from '@/jobs/check-files';
import { limit } from '@/lib/env';
import { getSequelize } from '@/models/database';
import { listFileChecks } from '@/models/queries/file-checks';
import { labStorage } from '@/models/queries/storage';
import { writeAudit } from '@/models/queries/write-audit';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  GET: memberRoute('GET /file-checks', ({ viewer, query }) => listFileChecks(viewer.labId, query)),
  POST: memberRoute('POST /file-checks', async ({ viewer: { labId, userId } }) => {
    await getSequelize().transaction(async (transaction) => {
      const jobId = await askForFileCheck(labId, limit('nightlyCheckBytes'), transaction);
      // One that is under way is what was asked for.
      if (!jobId) return;
      const entry = { action: 'files.check-asked', subjectKind: 'lab', subjectId: labId };
      await writeAudit({ labId, userId, ...entry }, transaction);
    });
    return new Answer(await labStorage(labId), 202);
  }),
});
