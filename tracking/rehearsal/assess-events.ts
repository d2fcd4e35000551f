import type { MeasuredTracks } from '../assess/measured-tracks';
import type { ReconnectionCandidate } from '../pairs/candidate';
import { wilsonInterval } from '../populations/wilson';
import type { Scene, SceneEvent } from '../simulate/scene';
import type { EventAssessment, EventOutcome, Share } from './assessment';
import type { FollowedTracers } from './follow-tracers';
import type { RehearsalTruth } from './truth';

/** A candidate whose meeting is farther than this from the true one is another thing, frames. */
const SAME_MEETING_FRAMES = 4;
/** Around a meeting, tracks are looked at for so long: a track may break there. */
const AROUND_FRAMES = 12;

/** What of a candidate is compared. */
export type JudgedCandidate = Pick<
  ReconnectionCandidate,
  'trackA' | 'trackB' | 't0S' | 'accepted' | 'failed'
>;

/**
 * Which true meetings were found and which candidates are true. Of planted particles a candidate is
 * known to be none only where both its tracks follow planted ones.
 */
export function assessEvents(
  { scene, kind, made }: RehearsalTruth,
  candidates: readonly JudgedCandidate[],
  measured: MeasuredTracks,
  followed: FollowedTracers,
): EventAssessment {
  const event = new Array<number>(candidates.length).fill(-1);
  const outcomes = scene.events.map((meeting, number): EventOutcome => {
    const a = tracksAround(meeting.tracerA, meeting.t0Frames, measured, followed);
    const b = tracksAround(meeting.tracerB, meeting.t0Frames, measured, followed);
    let best = -1;
    candidates.forEach(({ trackA, trackB, t0S, accepted }, c) => {
      const off = Math.abs(t0S / made.frameIntervalS - meeting.t0Frames);
      if (off > SAME_MEETING_FRAMES || event[c] >= 0) return;
      if (!(a.has(trackA) && b.has(trackB)) && !(a.has(trackB) && b.has(trackA))) return;
      // One meeting is one event: of two candidates the accepted one stands for it.
      if (best >= 0 && (candidates[best].accepted || !accepted)) return;
      best = c;
    });
    if (best >= 0) event[best] = number;
    return {
      t0S: meeting.t0Frames * made.frameIntervalS,
      ...placeOf(scene, meeting),
      ...pointsAround(scene, meeting),
      outcome: best < 0 ? 'no candidate' : candidates[best].accepted ? 'found' : 'not accepted',
      candidate: best < 0 ? null : best,
      failed: best < 0 ? [] : [...candidates[best].failed],
    };
  });
  const truth = candidates.map(({ trackA, trackB }, c): boolean | null => {
    if (event[c] >= 0) return true;
    if (kind === 'simulated') return false;
    return followed.tracerOfTrack[trackA] >= 0 && followed.tracerOfTrack[trackB] >= 0 ? false : null;
  });
  const accepted = candidates.flatMap((candidate, c) => (candidate.accepted ? [truth[c]] : []));
  const acceptedTrue = accepted.filter((is) => is === true).length;
  const found = outcomes.filter(({ outcome }) => outcome === 'found').length;
  return {
    events: outcomes,
    accepted: accepted.length,
    acceptedTrue,
    efficiency: shareOf(found, outcomes.length),
    purity: accepted.includes(null) ? null : shareOf(acceptedTrue, accepted.length),
    truth,
  };
}

const shareOf = (part: number, of: number): Share | null =>
  of > 0 ? { value: part / of, ...wilsonInterval(part, of) } : null;

/** Tracks that follow a tracer close to a moment. */
function tracksAround(
  tracer: number,
  t0Frames: number,
  { start, frame }: MeasuredTracks,
  { tracerOfPoint }: FollowedTracers,
): Set<number> {
  const tracks = new Set<number>();
  for (let t = 0; t + 1 < start.length; t++) {
    for (let p = start[t]; p < start[t + 1]; p++) {
      if (tracerOfPoint[p] === tracer && Math.abs(frame[p] - t0Frames) <= AROUND_FRAMES) {
        tracks.add(t);
        break;
      }
    }
  }
  return tracks;
}

function pointsAround(scene: Scene, { tracerA, tracerB, t0Frames }: SceneEvent) {
  const count = (tracer: number, side: (frame: number) => boolean) =>
    scene.frame.subarray(scene.start[tracer], scene.start[tracer + 1]).filter(side).length;
  const before = (frame: number) => frame < t0Frames;
  const after = (frame: number) => frame >= t0Frames;
  return {
    pointsBefore: Math.min(count(tracerA, before), count(tracerB, before)),
    pointsAfter: Math.min(count(tracerA, after), count(tracerB, after)),
  };
}

/** Middle between the two tracers at the frame nearest to their meeting in which each is seen. */
function placeOf(scene: Scene, { tracerA, tracerB, t0Frames }: SceneEvent): { xPx: number; yPx: number } {
  const nearest = (tracer: number) => {
    let best = scene.start[tracer];
    for (let p = best; p < scene.start[tracer + 1]; p++) {
      if (Math.abs(scene.frame[p] - t0Frames) < Math.abs(scene.frame[best] - t0Frames)) best = p;
    }
    return best;
  };
  const [a, b] = [nearest(tracerA), nearest(tracerB)];
  return { xPx: (scene.xPx[a] + scene.xPx[b]) / 2, yPx: (scene.yPx[a] + scene.yPx[b]) / 2 };
}
