import type { Correction } from '@/tracking/corrections/correction';
import { emptyTrack } from '@/tracking/corrections/edited-track';
import { packTracks } from '@/tracking/corrections/pieces';
import { createRandom, type Random } from '@/tracking/random';
import { POINT_BRIDGED, POPULATIONS, type Tracks } from '@/tracking/types';
import { EXTENT, type FakeServer } from './fake-server';

/** Twenty tracks of a recording of 60 frames, some points missed. */
export function someTracks(seed: number): Tracks {
  const random = createRandom(seed);
  const slices = Array.from({ length: 20 }, (_, number) => {
    const first = random.integer(40);
    const last = first + 4 + random.integer(EXTENT.frames - first - 4);
    const track = emptyTrack(number, first, last);
    const [x, y] = [50 + 400 * random.uniform(), 50 + 400 * random.uniform()];
    for (let k = 0; k < track.frame.length; k += 1) {
      const inside = k > 0 && k < track.frame.length - 1;
      track.xPx[k] = x + 0.5 * k;
      track.yPx[k] = y + 0.25 * k;
      track.sxPx[k] = 0.1;
      track.syPx[k] = 0.1;
      track.brightness[k] = 500;
      track.flags[k] = inside && random.integer(8) === 0 ? POINT_BRIDGED : 0;
    }
    return track;
  });
  slices.sort((a, b) => a.frame[0] - b.frame[0] || a.yPx[0] - b.yPx[0]);
  return packTracks(slices).tracks;
}

type Change = Exclude<Correction, { kind: 'undo' }>;

/** A change of some track that is there, mostly one that can be made. */
export function randomChange(server: FakeServer, { integer, uniform }: Random): Change {
  const { state } = server;
  const numbers = Array.from({ length: state.nextNumber }, (_, n) => n).filter((n) => state.get(n) !== null);
  const track = numbers[integer(numbers.length)];
  const points = state.get(track)!;
  const frame = points.frame[integer(points.frame.length)];
  const place = { x_px: 500 * uniform(), y_px: 500 * uniform() };
  switch (integer(10)) {
    case 0:
      return { kind: 'split', track, frame };
    case 1:
      return { kind: 'join', track, with: numbers[integer(numbers.length)] };
    case 2:
      return { kind: 'trim', track, from: frame, to: points.frame[points.frame.length - 1] };
    case 3:
      return integer(4) === 0
        ? { kind: 'remove', track }
        : { kind: 'trim', track, from: points.frame[0], to: frame };
    case 4:
      return { kind: 'add-point', track: integer(4) === 0 ? null : track, frame: Math.min(EXTENT.frames - 1, points.frame[points.frame.length - 1] + integer(4)), ...place }; // prettier-ignore
    case 5:
      return { kind: 'move-point', track, frame, ...place };
    case 6:
      return { kind: 'reclass', track, population: POPULATIONS[integer(3)] };
    case 7:
      return { kind: 'mark-line', frame, points: [[place.x_px, place.y_px], [500 * uniform(), 500 * uniform()]] }; // prettier-ignore
    case 8:
      return { kind: 'complete-frame', frame };
    default:
      return {
        kind: 'reclass',
        track,
        population: POPULATIONS[integer(3)],
        from: points.frame[0],
        to: frame,
      };
  }
}
