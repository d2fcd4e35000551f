import { mkdir, readdir } from 'node:fs/promises';
import { join } from 'node:path';
import type { PlannedAnalysis, PlannedStrip } from '@/lib/exports/plan';
import { candidatesToShow } from '@/models/queries/candidates-to-show';
import { drawStrips } from '../draw-strips';
import type { JobContext } from '../job-context';
import { stackFolder } from '../stack-folder';
import { sizeAtHome } from '../stack-store';

/** A package shows what was found; thousands of pictures would only make it heavy. */
const STRIPS_MOST = 100;

/** Candidates of an analysis that go into its package as pictures; none where its frames are no longer stored. */
export async function planStrips(
  labId: string,
  { id, recording }: Pick<PlannedAnalysis, 'id' | 'recording'>,
): Promise<PlannedStrip[]> {
  const index = join(stackFolder(recording.id), 'index.bin');
  if ((await sizeAtHome(recording.id, index)) === null) return [];
  const shown = await candidatesToShow(labId, [id], STRIPS_MOST);
  return shown.map(({ id: candidateId, event }) => ({ candidateId, event }));
}

/** Composes those pictures. @returns names of the files */
export async function writeStrips(
  context: { labId: string; signal: AbortSignal; compute: JobContext<never>['compute'] },
  { id: analysisId, strips = [] }: PlannedAnalysis,
  folder: string,
): Promise<string[]> {
  await mkdir(folder, { recursive: true });
  await drawStrips({ ...context, analysisId }, async ({ candidateIds }) =>
    strips
      // Tracks may be corrected while the package is built: a candidate that is gone has no picture any more.
      .filter(({ candidateId }) => candidateIds.includes(candidateId))
      .map(({ candidateId, event }) => ({
        id: candidateId,
        path: join(folder, `candidate-${String(event).padStart(4, '0')}.png`),
      })),
  );
  return (await readdir(folder)).sort();
}
