import { rm } from 'node:fs/promises';
import { composeStripsJob } from './compose-strips';
import { drawStrips } from './draw-strips';
import type { JobHandler } from './job-context';
import { objectStore } from './object-store';
import { candidateStripFile } from './stack-folder';
import { sizeAtHome, storeFile } from './stack-store';
import { tellOfDisagreements } from './tell-of-review';

export const composeStripsHandler: JobHandler<Record<string, never>> = {
  definition: composeStripsJob,
  async run({ claim, signal, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    let recordingId = '';
    const made: string[] = [];
    await drawStrips({ labId, analysisId, signal, compute, onProgress: report }, async (source) => {
      recordingId = source.recordingId;
      const missing: { id: string; path: string }[] = [];
      for (const id of source.candidateIds) {
        const path = candidateStripFile(recordingId, id, source.tracksRevision);
        if ((await sizeAtHome(recordingId, path)) === null) missing.push({ id, path });
      }
      made.push(...missing.map(({ path }) => path));
      return missing;
    });
    if (objectStore()) {
      for (const path of made) {
        await storeFile(recordingId, path, path);
        await rm(path, { force: true });
      }
    }
    await commit((transaction) => tellOfDisagreements(labId, analysisId, transaction));
  },
  // The analysis is as good as before; disagreements are told of without pictures.
  onGivenUp: ({ labId, subjectId }, _reason, transaction) =>
    tellOfDisagreements(labId, subjectId, transaction),
};
