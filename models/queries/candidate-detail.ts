import { notFound } from '@/lib/errors';
import { filmOf, type Film } from '@/lib/review/film';
import type { CandidateDetailView, FilmPathView } from '@/lib/views/review-view';
import { isMeasured, type EditedTrack } from '@/tracking/corrections/edited-track';
import { outcomeJoins, type Sight } from './candidate-sight';
import { readEditedTracks } from './edited-tracks';
import { CANDIDATE_COLUMNS, candidateView, type CandidateRow } from './list-candidates';
import { selectRow, selectRows } from './select';
import { currentTracksRevision, validRows } from './tracks-revision';
import { ownVerdict } from './verdicts';

interface Row extends CandidateRow {
  recording_id: string;
  frame_interval_s: number;
  frames: number;
  width: number | null;
  height: number | null;
}

/** A candidate with the cut of its film and its two tracks. */
export interface CandidateOnFilm {
  row: Row;
  film: Film;
  paths: FilmPathView[];
}

/** Frames around the meeting that could be on a film. */
const REACH_FRAMES = 16;

/** @throws LabError NOT_FOUND */
export async function candidateOnFilm(
  labId: string,
  candidateId: string,
  sight: Sight,
): Promise<CandidateOnFilm> {
  const row = await selectRow<Row>(
    `SELECT ${CANDIDATE_COLUMNS}, a.recording_id, (a.conditions->>'frameInterval_s')::float8 AS frame_interval_s,
       a.frames, g.width, g.height
     FROM candidates c JOIN analyses a ON a.id = c.analysis_id JOIN recordings g ON g.id = a.recording_id
       ${outcomeJoins('$3')} WHERE c.lab_id = $1 AND c.id = $2`,
    [labId, candidateId, sight.userId],
  );
  if (!row) throw notFound('candidate');
  const { facts, frames } = row;
  const meetingFrame = facts.t0S / row.frame_interval_s;
  const from = Math.max(0, Math.round(meetingFrame) - REACH_FRAMES);
  const to = Math.min(frames - 1, Math.round(meetingFrame) + REACH_FRAMES);
  const paths = await pathsOf(labId, row.analysis_id, [facts.trackA, facts.trackB], from, to);
  const image = { frames, width: row.width ?? 1, height: row.height ?? 1 };
  const film = filmOf({ meetingFrame, xPx: facts.xPx, yPx: facts.yPx, paths, image });
  return { row, film, paths };
}

/** A candidate with all that its page on the review desk shows. @throws LabError NOT_FOUND */
export async function candidateDetail(
  labId: string,
  candidateId: string,
  sight: Sight,
  mayReview: boolean,
): Promise<CandidateDetailView> {
  const { row, film, paths } = await candidateOnFilm(labId, candidateId, sight);
  return {
    ...candidateView(row, sight),
    film,
    paths,
    own: mayReview ? await ownVerdict(labId, candidateId, sight) : null,
  };
}

const hundredths = (px: number) => Math.round(px * 100) / 100;

/** The two tracks alone: readers go from one candidate to the next as quickly as they judge. */
async function pathsOf(
  labId: string,
  analysisId: string,
  numbers: readonly number[],
  from: number,
  to: number,
): Promise<FilmPathView[]> {
  const revision = (await currentTracksRevision(labId, analysisId)) ?? 0;
  const tracks = await readEditedTracks(analysisId, revision, numbers);
  const rows = await selectRows<{ number: number; population: number | null }>(
    `SELECT t.number, t.population FROM tracks t
     WHERE t.analysis_id = $1 AND t.number = ANY($3::int[]) AND ${validRows('t')}`,
    [analysisId, revision, [...numbers]],
  );
  const populations = new Map(rows.map(({ number, population }) => [number, population]));
  return numbers.map((number) =>
    pathOf(number, tracks.get(number) ?? null, populations.get(number) ?? null, from, to),
  );
}

function pathOf(
  number: number,
  track: EditedTrack | null,
  population: number | null,
  from: number,
  to: number,
): FilmPathView {
  const path: FilmPathView = { track: number, population: null, frame: [], x: [], y: [], bridged: [] };
  if (!track) return path;
  for (let i = 0; i < track.frame.length; i++) {
    const frame = track.frame[i];
    if (frame < from || frame > to) continue;
    path.population = population;
    path.frame.push(frame);
    path.x.push(hundredths(track.xPx[i]));
    path.y.push(hundredths(track.yPx[i]));
    path.bridged.push(!isMeasured(track, i));
  }
  return path;
}
