import { FOUND_WITHIN_PX } from '../assess';
import type { MeasuredTracks } from '../assess/measured-tracks';
import { matchPoints } from '../assess/point-match';
import type { Scene } from '../simulate/scene';

/** Which tracer each measured point of each track follows. */
export interface FollowedTracers {
  /** By point of the tracks: number of the tracer, -1 where none is near. */
  tracerOfPoint: Int32Array;
  /** By track: the tracer that most of its points follow, -1 for a track that follows none. */
  tracerOfTrack: Int32Array;
  /** Track points that follow another tracer than the point before them did, of all pairs of points that follow one. */
  wrongLinks: number;
  links: number;
  /** Tracks that follow each tracer. */
  tracksOfTracer: Uint32Array;
}

/** Tells which tracer every track follows, by pairing points with the truth frame by frame within 2 px. */
export function followTracers(scene: Scene, tracks: MeasuredTracks): FollowedTracers {
  const partner = matchPoints(scene, tracks, scene.frames, FOUND_WITHIN_PX);
  const tracerOfPoint = new Int32Array(tracks.frame.length).fill(-1);
  for (let i = 0; i < scene.tracers; i++) {
    for (let p = scene.start[i]; p < scene.start[i + 1]; p++) {
      if (partner[p] >= 0) tracerOfPoint[partner[p]] = i;
    }
  }
  const count = tracks.start.length - 1;
  const tracerOfTrack = new Int32Array(count).fill(-1);
  const tracksOfTracer = new Uint32Array(scene.tracers);
  let wrongLinks = 0;
  let links = 0;
  for (let t = 0; t < count; t++) {
    const points = new Map<number, number>();
    let before = -1;
    for (let p = tracks.start[t]; p < tracks.start[t + 1]; p++) {
      const tracer = tracerOfPoint[p];
      if (tracer < 0) continue;
      points.set(tracer, (points.get(tracer) ?? 0) + 1);
      if (before >= 0) {
        links++;
        if (before !== tracer) wrongLinks++;
      }
      before = tracer;
    }
    let most = 0;
    for (const [tracer, times] of points) {
      if (times > most) [most, tracerOfTrack[t]] = [times, tracer];
    }
    const measured = tracks.start[t + 1] - tracks.start[t];
    // A track of which less than half follows one tracer follows none.
    if (2 * most < measured) tracerOfTrack[t] = -1;
    else tracksOfTracer[tracerOfTrack[t]]++;
  }
  return { tracerOfPoint, tracerOfTrack, wrongLinks, links, tracksOfTracer };
}
