import { candidatesForStrips, stripSourceOf, type StripSource } from '@/models/queries/candidate-strips';
import type { JobContext } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { stackPlace } from './stack-store';

/** Strips composed in one go: seconds of work, so that a stop is heard soon. */
const AT_ONCE = 20;

interface Drawing {
  labId: string;
  analysisId: string;
  signal: AbortSignal;
  compute: JobContext<never>['compute'];
  onProgress?: (share: number) => void;
}

/**
 * Composes strips of candidates of an analysis, each there whole or not at all.
 * @param wanted chooses among the analysis' candidates, and says where each picture goes
 */
export async function drawStrips(
  { labId, analysisId, signal, compute, onProgress }: Drawing,
  wanted: (source: StripSource) => Promise<{ id: string; path: string }[]>,
): Promise<void> {
  const source = await stripSourceOf(labId, analysisId);
  if (!source) return;
  const pathOf = new Map((await wanted(source)).map(({ id, path }) => [id, path]));
  const ids = [...pathOf.keys()];
  if (ids.length === 0) return;
  const stackDir = await stackPlace(source.recordingId);
  const { contrast, pixelSizeM, frameIntervalS } = source;
  for (let i = 0; i < ids.length; i += AT_ONCE) {
    // Fewer pictures than were wanted must not pass for all of them.
    signal.throwIfAborted();
    const strips = await candidatesForStrips(labId, ids.slice(i, i + AT_ONCE));
    await compute(
      'composeStrips',
      {
        ...{ stackDir, contrast, pixelSizeM, frameIntervalS },
        strips: strips.map(({ id, ...strip }) => ({ ...strip, path: pathOf.get(id)! })),
      },
      { timeoutMs: LONG_TIMEOUT_MS },
    );
    onProgress?.(Math.min(1, (i + AT_ONCE) / ids.length));
  }
}
