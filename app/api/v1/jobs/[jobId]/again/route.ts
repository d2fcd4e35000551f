import { memberRoute, methods } from '@/app/api/member-route';
import { done } from '@/auth/answer';
import { runAgain } from '@/jobs/run-again';
import { writeAudit } from '@/models/queries/write-audit';

export const dynamic = 'force-dynamic';

export const { GET, POST, PUT, PATCH, DELETE } = methods({
  POST: memberRoute('POST /jobs/{jobId}/again', async ({ viewer: { labId, userId }, params }) => {
    await runAgain(labId, params.jobId, ({ kind, subjectId }, transaction) =>
      writeAudit(
        {
          labId,
          userId,
          action: 'job.run-again',
          subjectKind: SUBJECT_KIND[kind] ?? 'analysis',
          subjectId,
          detail: { job: params.jobId, kind },
        },
        transaction,
      ),
    );
    return done();
  }),
});

/** Work that is not for an analysis. */
const SUBJECT_KIND: Record<string, string> = {
  'ingest-recording': 'recording',
  'send-mail': 'mail',
  'check-files': 'lab',
};
