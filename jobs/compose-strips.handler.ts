import { access } from 'node:fs/promises';
import { candidatesForStrips, stripSourceOf } from '@/models/queries/candidate-strips';
import { composeStripsJob } from './compose-strips';
import type { JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { candidateStripFile, stackFolder } from './stack-folder';
import { tellOfDisagreements } from './tell-of-review';

/** Strips composed in one go: seconds of work, so that a stop is heard soon. */
const AT_ONCE = 20;

export const composeStripsHandler: JobHandler<Record<string, never>> = {
  definition: composeStripsJob,
  async run({ claim, signal, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    const source = await stripSourceOf(labId, analysisId);
    if (source) {
      const fileOf = (id: string) => candidateStripFile(source.recordingId, id, source.tracksRevision);
      const missing: string[] = [];
      for (const id of source.candidateIds) if (!(await isThere(fileOf(id)))) missing.push(id);
      for (let i = 0; i < missing.length && !signal.aborted; i += AT_ONCE) {
        const strips = await candidatesForStrips(labId, missing.slice(i, i + AT_ONCE));
        await compute(
          'composeStrips',
          {
            stackDir: stackFolder(source.recordingId),
            contrast: source.contrast,
            pixelSizeM: source.pixelSizeM,
            frameIntervalS: source.frameIntervalS,
            strips: strips.map(({ id, ...strip }) => ({ ...strip, path: fileOf(id) })),
          },
          { timeoutMs: LONG_TIMEOUT_MS },
        );
        report(Math.min(1, (i + AT_ONCE) / missing.length));
      }
    }
    await commit((transaction) => tellOfDisagreements(labId, analysisId, transaction));
  },
  // The analysis is as good as before; disagreements are told of without pictures.
  onGivenUp: ({ labId, subjectId }, _reason, transaction) =>
    tellOfDisagreements(labId, subjectId, transaction),
};

const isThere = (path: string): Promise<boolean> =>
  access(path).then(
    () => true,
    () => false,
  );
