import { createRandom, mixSeed } from '../random';
import { POINT_BRIDGED, type Tracks } from '../types';
import type { Scene } from './scene';

export interface TrueTracksOptions {
  /** Gaussian error added to every measured coordinate, and stated as its standard error, px. */
  sigmaPx?: number;
  seed?: number;
  /** Tracers with fewer points are left out. */
  shortestTrackFrames?: number;
}

/** Tracks as a perfect linking would make them, and the tracer that each one follows. */
export interface TrueTracks {
  tracks: Tracks;
  tracer: Uint32Array;
}

/**
 * The tracks of a scene without any camera: one per tracer, frames in which it was dark filled by
 * interpolation and flagged as bridged.
 */
export function trueTracks(scene: Scene, options: TrueTracksOptions = {}): TrueTracks {
  const { sigmaPx = 0, seed = 1, shortestTrackFrames = 1 } = options;
  const tracer: number[] = [];
  const start = [0];
  for (let i = 0; i < scene.tracers; i++) {
    const from = scene.start[i];
    const to = scene.start[i + 1];
    if (to - from < shortestTrackFrames) continue;
    tracer.push(i);
    start.push(start[start.length - 1] + scene.frame[to - 1] - scene.frame[from] + 1);
  }
  const points = start[start.length - 1];
  const tracks: Tracks = {
    count: tracer.length,
    start: Uint32Array.from(start),
    frame: new Uint32Array(points),
    xPx: new Float32Array(points),
    yPx: new Float32Array(points),
    sxPx: new Float32Array(points).fill(Number.NaN),
    syPx: new Float32Array(points).fill(Number.NaN),
    brightness: new Float32Array(points).fill(Number.NaN),
    flags: new Uint8Array(points),
  };
  tracer.forEach((i, track) => {
    const random = createRandom(mixSeed(seed, i));
    const first = scene.frame[scene.start[i]];
    let before = -1;
    for (let p = scene.start[i]; p < scene.start[i + 1]; p++) {
      const at = start[track] + scene.frame[p] - first;
      tracks.frame[at] = scene.frame[p];
      tracks.xPx[at] = scene.xPx[p] + sigmaPx * random.normal();
      tracks.yPx[at] = scene.yPx[p] + sigmaPx * random.normal();
      tracks.sxPx[at] = sigmaPx;
      tracks.syPx[at] = sigmaPx;
      tracks.brightness[at] = scene.brightnessE[p];
      if (before >= 0) bridge(tracks, before, at);
      before = at;
    }
  });
  return { tracks, tracer: Uint32Array.from(tracer) };
}

function bridge(tracks: Tracks, from: number, to: number): void {
  for (let k = from + 1; k < to; k++) {
    const part = (k - from) / (to - from);
    tracks.frame[k] = tracks.frame[from] + k - from;
    tracks.xPx[k] = tracks.xPx[from] + part * (tracks.xPx[to] - tracks.xPx[from]);
    tracks.yPx[k] = tracks.yPx[from] + part * (tracks.yPx[to] - tracks.yPx[from]);
    tracks.flags[k] = POINT_BRIDGED;
  }
}
