import { describe, expect, it } from 'vitest';
import { HAND_ERROR_PX } from '@/tracking/corrections/apply-one';
import { appendCorrection, applyCorrections, rawTracks } from '@/tracking/corrections/apply-corrections';
import type { Correction, LoggedCorrection } from '@/tracking/corrections/correction';
import { NOT_GIVEN } from '@/tracking/corrections/edited-track';
import { piecesOf } from '@/tracking/corrections/pieces';
import { renumberNewTracks } from '@/tracking/corrections/renumber';
import { POINT_ADDED, POINT_BRIDGED, POINT_MOVED } from '@/tracking/types';
import { EXTENT, madeTracks } from './made-tracks';

const range = (from: number, to: number) => Array.from({ length: to - from + 1 }, (_, i) => from + i);

/** Track 0 in frames 0 to 9, track 1 in 2 to 6, track 2 in 12 to 19 but for 15 and 16. */
const raw = madeTracks([range(0, 9), range(2, 6), [12, 13, 14, 17, 18, 19]]);
const source = rawTracks(raw);

function log(...corrections: (Correction & { gesture?: string })[]): LoggedCorrection[] {
  const entries: LoggedCorrection[] = [];
  for (const correction of corrections) {
    const entry = { ...correction, id: `c${entries.length + 1}` };
    appendCorrection(source, entries, entry, EXTENT);
    entries.push(entry);
  }
  return entries;
}
const state = (...corrections: (Correction & { gesture?: string })[]) =>
  applyCorrections(source, log(...corrections), EXTENT);
const framesOf = (number: number, from: ReturnType<typeof state>) => {
  const track = from.get(number);
  return track && [track.frame[0], track.frame[track.frame.length - 1]];
};
const split = (track: number, frame: number): Correction => ({ kind: 'split', track, frame });
const undo = (of: string): Correction => ({ kind: 'undo', of });

describe('one correction', () => {
  it('splits so that the earlier part keeps the number and the later one takes the next', () => {
    const after = state(split(0, 4), split(3, 7));
    expect([0, 3, 4].map((n) => framesOf(n, after))).toEqual([
      [0, 3],
      [4, 6],
      [7, 9],
    ]);
    expect(after.nextNumber).toBe(5);
  });

  it('leaves no bridged point at an end where it splits', () => {
    const after = state(split(2, 16));
    expect([framesOf(2, after), framesOf(3, after)]).toEqual([
      [12, 14],
      [17, 19],
    ]);
  });

  it('joins under the number of the track that begins first, bridging on a straight line', () => {
    const after = state({ kind: 'join', track: 2, with: 1 });
    expect(after.get(2)).toBeNull();
    const joined = after.get(1)!;
    expect(framesOf(1, after)).toEqual([2, 19]);
    const [end, begin] = [raw.xPx[raw.start[2] - 1], raw.xPx[raw.start[2]]];
    expect(joined.flags[5]).toBe(POINT_BRIDGED);
    expect(joined.xPx[5]).toBe(Math.fround((1 - 1 / 6) * end + (1 / 6) * begin));
    expect(joined.sxPx[5]).toBeNaN();
  });

  it('adds a point in a gap and draws the bridge beside it anew', () => {
    const after = state({
      kind: 'add-point',
      track: 2,
      frame: 15,
      x_px: 30,
      y_px: 20,
      sx_px: 0.1,
      sy_px: 0.2,
    });
    const track = after.get(2)!;
    expect([track.flags[3], track.flags[4]]).toEqual([POINT_ADDED, POINT_BRIDGED]);
    expect([track.xPx[3], track.sxPx[3], track.syPx[3]]).toEqual([30, 0.1, 0.2].map(Math.fround));
    expect(track.xPx[4]).toBe(Math.fround(0.5 * 30 + 0.5 * track.xPx[5]));
  });

  it('gives a point set by eye the error of an eye, and marks it as moved', () => {
    const track = state({ kind: 'move-point', track: 1, frame: 4, x_px: 9, y_px: 9 }).get(1)!;
    expect([track.flags[2], track.sxPx[2]]).toEqual([POINT_MOVED, HAND_ERROR_PX]);
    expect(raw.flags[raw.start[1] + 2]).toBe(0);
  });

  it('begins a track with a point of no track', () => {
    const after = state(
      { kind: 'add-point', track: null, frame: 30, x_px: 3, y_px: 3 },
      { kind: 'add-point', track: 3, frame: 32, x_px: 5, y_px: 5 },
    );
    expect(framesOf(3, after)).toEqual([30, 32]);
    expect(after.get(3)!.xPx[1]).toBe(4);
  });

  it("cuts a track for measuring where a person's population begins and ends", () => {
    const track = state({ kind: 'reclass', track: 0, population: 'free', from: 3, to: 5 }).get(0)!;
    expect(
      piecesOf(track).map(({ frame, population }) => [frame[0], frame[frame.length - 1], population]),
    ).toEqual([
      [0, 2, NOT_GIVEN],
      [3, 5, 1],
      [6, 9, NOT_GIVEN],
    ]);
  });

  it.each([
    [split(9, 3), 'There is no track 9 now.'],
    [split(0, 0), 'Track 0 runs from frame 0 to 9: split it at a frame from 1 to 9.'],
    [{ kind: 'join', track: 0, with: 0 }, "Track 0 can't be joined with itself."],
    [
      { kind: 'join', track: 0, with: 1 },
      'Tracks 0 and 1 are both there in frames 2 to 6: split or trim one of them first.',
    ],
    [
      { kind: 'trim', track: 2, from: 15, to: 16 },
      'Track 2 has no measured point in frames 15 to 16. To drop it, remove it.',
    ],
    [
      { kind: 'trim', track: 1, from: 0, to: 9 },
      'Track 1 lies within frames 0 to 9 already: nothing would change.',
    ],
    [{ kind: 'trim', track: 1, from: 5, to: 3 }, 'Frame 5 comes after frame 3.'],
    [
      { kind: 'add-point', track: 1, frame: 3, x_px: 1, y_px: 1 },
      'Track 1 has a point in frame 3 already: move it instead.',
    ],
    [
      { kind: 'move-point', track: 2, frame: 15, x_px: 1, y_px: 1 },
      'Track 2 has no measured point in frame 15: add one instead.',
    ],
    [
      { kind: 'add-point', track: 1, frame: 40, x_px: 1, y_px: 1 },
      'The recording has frames 0 to 39. Received 40.',
    ],
    [
      { kind: 'add-point', track: 1, frame: 9, x_px: 64, y_px: 1 },
      'The point lies outside the image of 64 x 48 px.',
    ],
    [
      { kind: 'reclass', track: 1, population: 'free', from: 20, to: 30 },
      'Track 1 runs from frame 2 to 6: choose frames among those.',
    ],
    [undo('nothing'), 'There is no such correction in this analysis.'],
  ] satisfies [Correction, string][])('refuses %j in a sentence', (correction, sentence) => {
    expect(() => log(correction)).toThrow(sentence);
  });
});

describe('undo', () => {
  it('takes back an earlier correction when later ones stand without it', () => {
    const after = state(
      split(0, 4),
      { kind: 'move-point', track: 0, frame: 2, x_px: 1, y_px: 1 },
      undo('c1'),
    );
    expect(framesOf(0, after)).toEqual([0, 9]);
    expect(after.get(0)!.flags[2]).toBe(POINT_MOVED);
    expect(after.get(3)).toBeNull();
  });

  it('refuses when a later correction would come to mean something else, and names it', () => {
    // Without the split the removal would take the whole track.
    expect(() => log(split(0, 4), { kind: 'remove', track: 0 }, undo('c1'))).toThrow(
      "Correction 1 can't be taken back alone: correction 2 builds on how tracks are now. Take that back first.",
    );
    expect(() => log(split(0, 4), split(3, 7), { kind: 'remove', track: 4 }, undo('c1'))).toThrow(
      'corrections 2 and 3 build on',
    );
  });

  it('takes back a gesture as a whole, and puts it back as a whole', () => {
    const gesture = { gesture: 'g' };
    const made = [
      { ...split(0, 4), ...gesture },
      { kind: 'remove' as const, track: 3, ...gesture },
    ];
    expect(framesOf(0, state(...made, undo('c2')))).toEqual([0, 9]);
    const again = state(...made, undo('c2'), undo('c3'));
    expect([framesOf(0, again), again.get(3)]).toEqual([[0, 3], null]);
    expect(() => log(...made, undo('c2'), undo('c1'))).toThrow('Correction 1 was taken back already.');
  });

  it('gives a track that comes back its own number, and no other track that number', () => {
    const after = state(split(0, 4), undo('c1'), split(1, 4), undo('c2'));
    expect([3, 4].map((n) => framesOf(n, after))).toEqual([
      [4, 9],
      [4, 6],
    ]);
  });

  it('refuses to put back what can no longer be made', () => {
    expect(() => log(split(0, 4), undo('c1'), { kind: 'remove', track: 0 }, undo('c2'))).toThrow(
      "Correction 2 can't be put back alone: correction 3 builds on how tracks are now.",
    );
  });
});

it('numbers tracks of waiting corrections anew when others made tracks meanwhile', () => {
  const waiting: Correction[] = [
    split(0, 4),
    { kind: 'join', track: 3, with: 2 },
    { kind: 'remove', track: 1 },
  ];
  expect(renumberNewTracks(waiting, 3, 5)).toEqual([
    split(0, 4),
    { kind: 'join', track: 5, with: 2 },
    { kind: 'remove', track: 1 },
  ]);
});
