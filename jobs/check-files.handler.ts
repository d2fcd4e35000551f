import type { Transaction } from 'sequelize';
import { sha256OfStack } from '@/stacks/hash-files';
import { models } from '@/models';
import {
  administratorsOf,
  recordingsToCheck,
  saveFinding,
  type FileFinding,
  type RecordingToCheck,
} from '@/models/queries/file-checks';
import { writeAudit } from '@/models/queries/write-audit';
import { checkFilesJob, type CheckFilesPayload } from './check-files';
import { sourceOf } from './ingest-source';
import type { JobHandler } from './job-context';
import { askForMail } from './send-mail';
import { withLocalStack } from './stack-store';

const SHOWN = 12;
const short = (hash: string) => `${hash.slice(0, SHOWN)}..`;

export const checkFilesHandler: JobHandler<CheckFilesPayload> = {
  definition: checkFilesJob,
  async run({ claim, payload, signal, report, commit }) {
    const { labId } = claim;
    const sample = await recordingsToCheck(labId, payload.sampleBytes);
    const total = sample.reduce((sum, { bytes }) => sum + bytes, 0);
    const findings: (FileFinding & { name: string })[] = [];
    let done = 0;
    for (const recording of sample) {
      const finding = await lookAt(labId, recording.id, signal, (bytes) => {
        done += bytes;
        report(total > 0 ? Math.min(1, done / total) : 1);
      });
      if (finding) findings.push({ ...finding, name: recording.name });
    }
    await commit(async (transaction) => {
      const newlyDamaged: string[] = [];
      for (const { name, ...finding } of findings) {
        const before = await saveFinding(labId, finding, transaction);
        const [wasIntact, isIntact] = [before === null || before === 'intact', finding.state === 'intact'];
        if (wasIntact === isIntact) continue;
        if (!isIntact) newlyDamaged.push(name);
        await writeAudit(
          {
            labId,
            userId: null,
            action: isIntact ? 'files.restored' : 'files.damaged',
            subjectKind: 'recording',
            subjectId: finding.recordingId,
            detail: finding.detail ? { found: finding.detail } : {},
          },
          transaction,
        );
      }
      if (newlyDamaged.length > 0) await alarm(labId, newlyDamaged, transaction);
    });
  },
  // What was seen before stays; the queue shows that this look failed.
  onGivenUp: async () => undefined,
};

/** @returns null for a recording that went away meanwhile */
async function lookAt(
  labId: string,
  recordingId: RecordingToCheck['id'],
  signal: AbortSignal,
  onBytes: (bytes: number) => void,
): Promise<FileFinding | null> {
  const recording = await models().Recording.findOne({ where: { id: recordingId, labId, state: 'ready' } });
  if (!recording?.sha256) return null;
  const { source } = await sourceOf(recording);
  try {
    const got = await withLocalStack(recordingId, () => sha256OfStack(source, { signal, onBytes }), {
      signal,
    });
    if (got === recording.sha256) return { recordingId, state: 'intact', detail: null };
    const detail = `SHA-256 is ${short(got)}, at arrival it was ${short(recording.sha256)}.`;
    return { recordingId, state: 'damaged', detail };
  } catch (cause) {
    const { code } = cause as { code?: string };
    if (code === 'ENOENT') return { recordingId, state: 'missing', detail: 'A stored file is not there.' };
    if (code === 'EIO')
      return { recordingId, state: 'damaged', detail: 'The disk can’t read a stored file.' };
    throw cause;
  }
}

async function alarm(labId: string, recordings: string[], transaction: Transaction): Promise<void> {
  for (const userId of await administratorsOf(labId, transaction)) {
    await askForMail({ labId, userId, order: { kind: 'files-damaged', recordings } }, transaction);
  }
}
