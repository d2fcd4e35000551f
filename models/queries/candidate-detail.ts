import { notFound } from '@/lib/errors';
import { filmOf, type Film } from '@/lib/review/film';
import type { CandidateDetailView, FilmPathView } from '@/lib/views/review-view';
import { POINT_BRIDGED } from '@/tracking/types';
import { outcomeJoins, type Sight } from './candidate-sight';
import { CANDIDATE_COLUMNS, candidateView, type CandidateRow } from './list-candidates';
import { selectRow } from './select';
import { POPULATION_UNKNOWN, trackWindow, type TrackWindow } from './track-window';
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
  const window = await trackWindow(labId, row.analysis_id, from, Math.max(from, to));
  const paths = [facts.trackA, facts.trackB].map((track) => pathOf(window, track));
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

function pathOf(window: TrackWindow | null, track: number): FilmPathView {
  const at = window ? window.track.indexOf(track) : -1;
  const path: FilmPathView = { track, population: null, frame: [], x: [], y: [], bridged: [] };
  if (!window || at < 0) return path;
  path.population = window.population[at] === POPULATION_UNKNOWN ? null : window.population[at];
  for (let i = window.start[at]; i < window.start[at + 1]; i++) {
    path.frame.push(window.frame[i]);
    path.x.push(hundredths(window.xPx[i]));
    path.y.push(hundredths(window.yPx[i]));
    path.bridged.push((window.flags[i] & POINT_BRIDGED) !== 0);
  }
  return path;
}
