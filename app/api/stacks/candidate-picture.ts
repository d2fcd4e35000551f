import { askForStrips } from '@/jobs/compose-strips';
import { candidateStripFile } from '@/jobs/stack-folder';
import { readStackFile, sizeAtHome } from '@/jobs/stack-store';
import { LabError } from '@/lib/errors';
import { getSequelize } from '@/models/database';
import { candidateOnFilm } from '@/models/queries/candidate-detail';
import { stripSourceOf } from '@/models/queries/candidate-strips';
import type { Sight } from '@/models/queries/candidate-sight';
import { makeFilmPicture } from '@/stacks/film-picture';
import { prefersPng, shownRecording } from './frame-picture';
import { withStack } from './open-stacks';

const HEADERS = { 'Cache-Control': 'private, max-age=3600', Vary: 'Accept, Authorization, Cookie' };

/** Frames around closest approach, cut to the film's square, without tracks. */
export async function filmPicture(
  request: Request,
  labId: string,
  candidateId: string,
  sight: Sight,
): Promise<Response> {
  const { row, film } = await candidateOnFilm(labId, candidateId, sight);
  const recording = await shownRecording(labId, row.recording_id);
  const format = prefersPng(request.headers.get('accept')) ? 'png' : 'webp';
  const { low = 0, high = 65_535 } = recording.imageQuality ?? {};
  const picture = await withStack(recording.id, recording.usePages ?? 0, (stack) =>
    makeFilmPicture(stack, film, { low, high: Math.max(low, high) }, format).catch((cause: unknown) => {
      throw new LabError('UNAVAILABLE', "These frames can't be read: the stored file is damaged or missing.", { cause }); // prettier-ignore
    }),
  );
  return new Response(new Uint8Array(picture), {
    headers: { ...HEADERS, 'Content-Type': `image/${format}`, 'Content-Length': String(picture.length) },
  });
}

/**
 * The strip of a candidate with both tracks, as a file. Where it is not composed yet, that is asked for.
 * @throws LabError NOT_FOUND; NOT_COMPUTED with `Retry-After` until it is there
 */
export async function stripPicture(labId: string, candidateId: string, sight: Sight): Promise<Response> {
  const { row } = await candidateOnFilm(labId, candidateId, sight);
  const analysisId = row.analysis_id;
  const source = await stripSourceOf(labId, analysisId);
  if (!source) throw new LabError('NOT_COMPUTED', 'There is no strip: the analysis is not done.');
  const file = candidateStripFile(source.recordingId, candidateId, source.tracksRevision);
  if ((await sizeAtHome(source.recordingId, file)) === null) {
    await getSequelize().transaction((transaction) => askForStrips(labId, analysisId, transaction));
    throw new LabError('NOT_COMPUTED', 'The strip is being composed. Ask again in a few seconds.', {
      headers: { 'Retry-After': '3' },
    });
  }
  const png = await readStackFile(source.recordingId, file);
  // Corrections of its tracks make another picture at the same address.
  const headers = { ...HEADERS, 'Cache-Control': 'private, no-cache', 'Content-Type': 'image/png' };
  return new Response(new Uint8Array(png), { headers });
}
