import { describe, expect, test, vi } from 'vitest';
import { freeFlights, freePathEstimate } from '@/tracking/estimates/free-path';
import { PIECE_FEATURES, PieceFeatures } from '@/tracking/populations/piece-features';
import { piecesOf, segmentsOf } from '@/tracking/populations/pieces';
import { FREE, TRAPPED } from '@/tracking/populations/codes';
import { findPopulations } from '@/tracking/populations/populations';
import { trackFeatures } from '@/tracking/populations/track-features';
import { KIND_FREE } from '@/tracking/simulate/scene';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import { trackSlice, type TrackSlice } from '@/tracking/track-slice';
import { POINT_BRIDGED, type Conditions } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

// A mixture is fitted to hundreds of tracks.
vi.setConfig({ testTimeout: 120_000 });

const RADIUS_M = 8e-6;
const DENSITY_M2 = 2e7;
const CONDITIONS: Conditions = {
  pixelSize_m: 1e-5,
  frameInterval_s: 0.005,
  temperature_K: 1.85,
  heatFlux_W_m2: 675,
  flowDirection: [1, 0],
  tracer: { diameter_m: 2 * RADIUS_M },
};
const scene = tangleScene({
  widthPx: 320,
  heightPx: 256,
  frames: 100,
  pixelSizeM: 1e-5,
  frameIntervalS: 0.005,
  sheetThicknessM: 2e-4,
  lineDensityM2: DENSITY_M2,
  beadsPerMetre: 4000,
  freeTracersPerFrame: 110,
  vnMPerS: 4e-3,
  tangleVelocityMPerS: -1e-3,
  captureRadiusM: RADIUS_M,
  seed: 3,
});
const { tracks, tracer } = trueTracks(scene, { sigmaPx: 0.15, seed: 3, shortestTrackFrames: 3 });
const found = findPopulations(tracks, { width: 320, height: 256 }, CONDITIONS, { trappedFrom: 0.9, seed: 1 });
const captureOf = new Map(scene.captures.map((capture) => [capture.tracer, capture.frame]));

describe('captures', () => {
  test('are found where both states last long enough, at their frame, and hardly anywhere else', () => {
    let clear = 0;
    let right = 0;
    for (let i = 0; i < tracks.count; i++) {
      const at = captureOf.get(tracer[i]);
      if (at === undefined) continue;
      const first = tracks.frame[tracks.start[i]];
      const end = first + tracks.start[i + 1] - tracks.start[i];
      if (at - first < 15 || end - at < 15) continue;
      clear++;
      const change = found.changes.find((one) => one.track === i);
      if (change?.kind === 'capture' && Math.abs(change.frame - at) <= 4) right++;
    }
    expect(clear).toBeGreaterThan(10);
    // 97 of 104 were found in trials with 12 frames on either side.
    expect(right).toBeGreaterThanOrEqual(Math.floor(0.75 * clear));
    // None of 1900 tracks without a change was split in those trials.
    const invented = found.changes.filter(({ track }) => !captureOf.has(tracer[track]));
    expect(invented.length).toBeLessThanOrEqual(2);
  });

  test('cut tracks into a free and a trapped piece that together are the track', () => {
    const pieces = piecesOf(tracks, found.population, found.changes);
    expect(pieces.tracks.count).toBe(tracks.count + found.changes.length);
    expect(pieces.tracks.start.at(-1)).toBe(tracks.frame.length);
    const segments = segmentsOf(pieces);
    for (const { track, frame, kind } of found.changes) {
      const own = segments.filter((segment) => segment.track === track);
      expect(own.length).toBeGreaterThanOrEqual(2);
      const after = own.find(({ fromFrame }) => fromFrame === frame);
      expect(after?.population).toBe(kind === 'capture' ? 'trapped' : 'free');
      expect(own.some(({ toFrame }) => toFrame === frame - 1)).toBe(true);
    }
    // Pieces of whole tracks keep what their track is.
    pieces.track.forEach((track, k) => {
      if (!found.changes.some((change) => change.track === track))
        expect(pieces.population[k]).toBe(found.population[track]);
    });
  });

  test('and the path until then give the line density back', () => {
    const pieces = piecesOf(tracks, found.population, found.changes);
    const flights = freeFlights(pieces, found.changes, CONDITIONS, [-0.5, 0], {
      width: 320,
      height: 256,
    });
    const { valueM2, statistical } = freePathEstimate(flights, CONDITIONS);
    // Chance, and some captures that don't show for long enough.
    expect(Math.abs(Math.log(valueM2! / DENSITY_M2))).toBeLessThan(3.3 * statistical + 0.3);
  });
});

test('without captures nothing is estimated, and why is said', () => {
  const none = freePathEstimate({ captures: 1, pathM: 1, relativeError: 1 }, CONDITIONS);
  expect(none.valueM2).toBeNull();
  expect(none.note).toMatch(/1 capture .* 5 are needed/);
  expect(freePathEstimate({ captures: 9, pathM: 1, relativeError: 0.4 }, {}).note).toMatch(/diameter/);
  // L = 2 / (pi b s): 2 / (pi 1e-6 m x 0.6366 mm) = 1e9 (row 34 of the check values of this estimator).
  const nine = freePathEstimate(
    { captures: 9, pathM: 9 * 0.6366198e-3, relativeError: 0.4 },
    { tracer: { diameter_m: 2e-6 } },
  );
  expectWithin(nine.valueM2!, 1e9, { rel: 1e-6 });
});

test('captures at one place may be of one line, and tell less than as many at many places', () => {
  // 144 straight flights of 50 frames, four to a block of 36; where they end is where they may be caught.
  const flights = (caught: (flight: number) => boolean) => {
    const points = 50;
    const count = 144;
    const at = (of: (flight: number, point: number) => number) =>
      Float32Array.from({ length: count * points }, (_, p) => of(Math.floor(p / points), p % points));
    const changes = Array.from({ length: count }, (_, track) => ({
      track,
      kind: 'capture' as const,
      frame: points,
      lnOdds: 9,
    }));
    const zeros = new Float32Array(count * points);
    const tracks = {
      count,
      start: Uint32Array.from({ length: count + 1 }, (_, i) => i * points),
      frame: Uint32Array.from({ length: count * points }, (_, p) => p % points),
      xPx: at((flight, point) => 20 + 40 * (Math.floor(flight / 4) % 6) + 0.1 * (point - points)),
      yPx: at((flight) => 20 + 40 * Math.floor(flight / 24)),
      sxPx: zeros,
      syPx: zeros,
      brightness: zeros,
      flags: new Uint8Array(count * points),
    };
    const pieces = {
      tracks,
      track: Uint32Array.from({ length: count }, (_, i) => i),
      population: new Uint8Array(count).fill(FREE),
      lnOdds: new Float64Array(count),
    };
    const found = changes.filter(({ track }) => caught(track));
    return freeFlights(pieces, found, { pixelSize_m: 1e-5 }, [0, 0], { width: 240, height: 240 });
  };
  const everywhere = flights((flight) => flight % 4 === 0);
  const atNinePlaces = flights((flight) => flight < 36);
  expect(everywhere.captures).toBe(36);
  expect(atNinePlaces.captures).toBe(36);
  // As a Poisson process: 1 / sqrt(36), and Student's t of 36 blocks.
  expectWithin(everywhere.relativeError, 1 / 6, { rel: 0.06 });
  // Nine blocks with 4 captures on 160 steps of path, the others with none on 120, at 36 on 4,680; and Student's t.
  const rate = 36 / 4680;
  const scatter = Math.sqrt(9 * (4 - 160 * rate) ** 2 + 27 * (120 * rate) ** 2) / 36;
  expectWithin(atNinePlaces.relativeError, scatter, { rel: 0.06 });
  expect(atNinePlaces.relativeError).toBeGreaterThan(1.6 * everywhere.relativeError);
});

test('features of any piece are those of the piece as a track of its own', () => {
  const flow = [Math.cos(0.4), Math.sin(0.4)] as const;
  let compared = 0;
  for (let i = 0; i < tracks.count && compared < 40; i++) {
    const slice = trackSlice(tracks, i);
    if (slice.frame.length < 40) continue;
    const pieces = new PieceFeatures(slice, CONDITIONS, flow);
    for (const [from, to] of [
      [0, slice.frame.length],
      [3, 20],
      [11, 33],
    ] as const) {
      const own = trackFeatures(cut(slice, from, to), 1e-5, 0.005, flow);
      expect(pieces.read(from, to)).toBe(own !== null);
      if (!own) continue;
      for (let d = 0; d < PIECE_FEATURES; d++) {
        expectWithin(pieces.value[d], own.value[d], { rel: 1e-5 });
        expectWithin(pieces.variance[d], own.variance[d], { rel: 1e-5 });
      }
      expectWithin(pieces.acrossPx, own.acrossPx, { abs: 1e-3 });
      compared++;
    }
  }
  expect(compared).toBeGreaterThan(20);
});

test('bridged positions count neither in pieces nor in tracks', () => {
  const track = Array.from({ length: tracks.count }, (_, i) => i).find(
    (i) => scene.kind[tracer[i]] === KIND_FREE && tracks.start[i + 1] - tracks.start[i] > 20,
  )!;
  const slice = cut(trackSlice(tracks, track), 0, 20);
  const flags = slice.flags.slice();
  for (const k of [0, 1, 9, 19]) flags[k] = POINT_BRIDGED;
  const bridged = { ...slice, flags };
  const own = trackFeatures(bridged, 1e-5, 0.005, [1, 0])!;
  const pieces = new PieceFeatures(bridged, CONDITIONS, [1, 0]);
  expect(pieces.read(0, 20)).toBe(true);
  for (let d = 0; d < PIECE_FEATURES; d++) expectWithin(pieces.value[d], own.value[d], { rel: 1e-5 });
  expect([TRAPPED, FREE]).toEqual([0, 1]);
});

function cut(slice: TrackSlice, from: number, to: number): TrackSlice {
  const part = <T extends Uint32Array | Float32Array | Uint8Array>(of: T) => of.subarray(from, to) as T;
  return {
    track: slice.track,
    frame: part(slice.frame),
    xPx: part(slice.xPx),
    yPx: part(slice.yPx),
    sxPx: part(slice.sxPx),
    syPx: part(slice.syPx),
    brightness: part(slice.brightness),
    flags: part(slice.flags),
  };
}
