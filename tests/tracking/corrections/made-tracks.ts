import fc from 'fast-check';
import type { Correction, LoggedCorrection } from '@/tracking/corrections/correction';
import { POINT_BRIDGED, POPULATIONS, type Tracks } from '@/tracking/types';

export const EXTENT = { width: 64, height: 48, frames: 40 };

/** Tracks from the frames in which each was seen; frames between are bridged as linking does it. */
export function madeTracks(seen: number[][]): Tracks {
  const total = seen.reduce((sum, frames) => sum + frames[frames.length - 1] - frames[0] + 1, 0);
  const tracks: Tracks = {
    count: seen.length,
    start: new Uint32Array(seen.length + 1),
    frame: new Uint32Array(total),
    xPx: new Float32Array(total),
    yPx: new Float32Array(total),
    sxPx: new Float32Array(total),
    syPx: new Float32Array(total),
    brightness: new Float32Array(total),
    flags: new Uint8Array(total),
  };
  let at = 0;
  seen.forEach((frames, track) => {
    tracks.start[track] = at;
    const measured = new Map(frames.map((frame) => [frame, at + frame - frames[0]]));
    const place = (frame: number) => [
      5 + track + 0.7 * frame + 0.1 * Math.sin(frame),
      10 + 3 * track + 0.3 * frame,
    ];
    for (let frame = frames[0]; frame <= frames[frames.length - 1]; frame++, at++) {
      tracks.frame[at] = frame;
      if (measured.has(frame)) {
        [tracks.xPx[at], tracks.yPx[at]] = place(frame);
        tracks.sxPx[at] = tracks.syPx[at] = 0.05;
        tracks.brightness[at] = 900 + frame;
        continue;
      }
      const before = frames.filter((one) => one < frame).at(-1)!;
      const after = frames.find((one) => one > frame)!;
      const from = measured.get(before)!;
      const share = (frame - before) / (after - before);
      const [xTo, yTo] = place(after).map(Math.fround);
      tracks.xPx[at] = (1 - share) * tracks.xPx[from] + share * xTo;
      tracks.yPx[at] = (1 - share) * tracks.yPx[from] + share * yTo;
      tracks.sxPx[at] = tracks.syPx[at] = tracks.brightness[at] = Number.NaN;
      tracks.flags[at] = POINT_BRIDGED;
    }
  });
  tracks.start[seen.length] = at;
  return tracks;
}

/** A few tracks with gaps. */
export const someTracks = (): fc.Arbitrary<Tracks> =>
  fc
    .array(fc.uniqueArray(fc.integer({ min: 0, max: EXTENT.frames - 1 }), { minLength: 2, maxLength: 20 }), {
      minLength: 2,
      maxLength: 6,
    })
    .map((seen) =>
      madeTracks(seen.map((frames) => frames.sort((a, b) => a - b)).sort((a, b) => a[0] - b[0])),
    );

const number = () => fc.integer({ min: 0, max: 9 });
const frame = () => fc.integer({ min: 0, max: EXTENT.frames - 1 });
const point = () => ({
  frame: frame(),
  x_px: fc.double({ min: 0, max: 60, noNaN: true }),
  y_px: fc.double({ min: 0, max: 44, noNaN: true }),
});

/** Any correction, possible or not; an undo names a place in the log by `of`, modulo its length. */
export const anyCorrection = (): fc.Arbitrary<Correction & { pick?: number }> =>
  fc.oneof(
    fc.record({ kind: fc.constant('split' as const), track: number(), frame: frame() }),
    fc.record({ kind: fc.constant('join' as const), track: number(), with: number() }),
    fc.record({ kind: fc.constant('trim' as const), track: number(), from: frame(), to: frame() }),
    fc.record({ kind: fc.constant('remove' as const), track: number() }),
    fc.record({ kind: fc.constant('add-point' as const), track: fc.option(number()), ...point() }),
    fc.record({ kind: fc.constant('move-point' as const), track: number(), ...point() }),
    fc.record({
      kind: fc.constant('reclass' as const),
      track: number(),
      population: fc.constantFrom(...POPULATIONS),
      from: frame(),
      to: frame(),
    }),
    fc.record({ kind: fc.constant('undo' as const), of: fc.constant(''), pick: fc.nat(1000) }),
  );

/** The correction as an entry of a log, its undo pointing at an entry before it. */
export function logged(
  correction: Correction & { pick?: number },
  log: readonly LoggedCorrection[],
  gesture: string | null = null,
): LoggedCorrection | null {
  const { pick, ...rest } = correction;
  const id = `c${log.length}`;
  if (rest.kind !== 'undo') return { ...rest, id, gesture };
  return log.length === 0 ? null : { kind: 'undo', of: log[pick! % log.length].id, id, gesture };
}
