import { readFile } from 'node:fs/promises';
import { assessRehearsal as assess } from '@/tracking/rehearsal/assess-rehearsal';
import type { RehearsalAssessment } from '@/tracking/rehearsal/assessment';
import { decodeTruth } from '@/tracking/rehearsal/truth';
import { takeEncodedRuns } from '@/tracking/spots';
import type { AssessRehearsalInput } from '../tasks';
import type { WorkContext } from './work-context';

/** Compares what an analysis found with the kept truth of its recording. */
export async function assessRehearsal(
  { truthPath, chunks, ...found }: AssessRehearsalInput,
  { onProgress }: WorkContext,
): Promise<RehearsalAssessment> {
  const truth = decodeTruth(await readFile(truthPath));
  onProgress(0.1);
  // Copies: a view into a larger buffer can't be decoded in place.
  const spots = takeEncodedRuns(chunks);
  return assess(truth, { ...found, spots });
}
