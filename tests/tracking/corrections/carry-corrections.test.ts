import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { applyOne } from '@/tracking/corrections/apply-one';
import {
  appendCorrection,
  applyCorrections,
  rawTracks,
  TrackOverlay,
} from '@/tracking/corrections/apply-corrections';
import { carryCorrections, placesTouched, type Carried } from '@/tracking/corrections/carry-corrections';
import { makesTrack, CorrectionRefusal, type LoggedCorrection } from '@/tracking/corrections/correction';
import { asEdited, isMeasured, type EditedTrack } from '@/tracking/corrections/edited-track';
import { packTracks } from '@/tracking/corrections/pieces';
import { trackSlice } from '@/tracking/track-slice';
import type { Tracks } from '@/tracking/types';
import { anyCorrection, EXTENT, logged, madeTracks, someTracks } from './made-tracks';

type Wish = ReturnType<typeof anyCorrection> extends fc.Arbitrary<infer T> ? T : never;

/** A log of what can be appended of some wishes. Points that people set stand apart from each other and from all tracks. */
function logOf(raw: Tracks, wishes: readonly (readonly [Wish, boolean])[]): LoggedCorrection[] {
  const log: LoggedCorrection[] = [];
  let gesture = 0;
  for (const [wish, goesOn] of wishes) {
    if (!goesOn) gesture++;
    const i = log.length;
    const apart =
      'x_px' in wish ? { ...wish, x_px: 45 + 3 * (i % 6), y_px: 2 + 3 * Math.floor(i / 6) } : wish;
    const entry = logged(apart, log, `g${gesture}`);
    if (!entry) continue;
    try {
      appendCorrection(rawTracks(raw), log, entry, EXTENT);
      log.push(entry);
    } catch (refusal) {
      if (!(refusal instanceof CorrectionRefusal)) throw refusal;
    }
  }
  return log;
}

/** The same tracks as another analysis might give them: other numbers, places a little off. */
function again(raw: Tracks, turn: number, offPx: number): EditedTrack[] {
  return Array.from({ length: raw.count }, (_, i) => {
    const track = asEdited(trackSlice(raw, i));
    const off = (values: Float32Array, sign: number) =>
      values.map((value, k) => value + sign * offPx * Math.sin(7 * k + i));
    return { ...track, track: (i + turn) % raw.count, xPx: off(track.xPx, 1), yPx: off(track.yPx, -1) };
  });
}

function tracksAfter(tracks: readonly EditedTrack[], { changes }: Carried): EditedTrack[] {
  const byNumber = new Map(tracks.map((track) => [track.track, track]));
  const store = new TrackOverlay((number) => byNumber.get(number) ?? null);
  let fresh = tracks.length;
  for (const { change } of changes) {
    applyOne(store, change, fresh, EXTENT);
    if (makesTrack(change)) fresh++;
  }
  return Array.from({ length: fresh }, (_, n) => store.get(n)).filter((track) => track !== null);
}

function tracksOf(raw: Tracks, log: readonly LoggedCorrection[]): EditedTrack[] {
  const state = applyCorrections(rawTracks(raw), log, EXTENT);
  return Array.from({ length: state.nextNumber }, (_, n) => state.get(n)).filter((track) => track !== null);
}

/** What tracks are whatever they are called: their frames, which of them were measured, classes, and places to 1 px. */
const shapes = (tracks: readonly EditedTrack[], digits: number): string[] =>
  tracks
    .map((track) =>
      Array.from(track.frame, (frame, i) =>
        [
          frame,
          track.given[i],
          isMeasured(track, i) ? `${track.xPx[i].toFixed(digits)} ${track.yPx[i].toFixed(digits)}` : '-',
        ].join(':'),
      ).join(' '),
    )
    .sort();

const wishes = () => fc.array(fc.tuple(anyCorrection(), fc.boolean()), { minLength: 1, maxLength: 25 });

describe('corrections carried to another analysis', () => {
  it('make of the same tracks under other numbers what they made of their own, all of them', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), fc.nat(5), (raw, list, turn) => {
        const log = logOf(raw, list);
        const target = again(raw, turn, 0);
        const source = { raw: rawTracks(raw), log };
        const carried = carryCorrections(source, { tracks: target, nextNumber: raw.count }, EXTENT);
        expect(carried.outcomes.filter(({ outcome }) => outcome === 'left')).toEqual([]);
        expect(shapes(tracksAfter(target, carried), 4)).toEqual(shapes(tracksOf(raw, log), 4));
      }),
      { numRuns: 200, seed: 21 },
    );
  });

  it('find tracers that the other analysis puts elsewhere by less than their errors', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), fc.nat(5), (raw, list, turn) => {
        const log = logOf(raw, list);
        const target = again(raw, turn, 0.2);
        const carried = carryCorrections(
          { raw: rawTracks(raw), log },
          { tracks: target, nextNumber: raw.count },
          EXTENT,
        );
        expect(carried.outcomes.filter(({ outcome }) => outcome === 'left')).toEqual([]);
        const frames = (tracks: readonly EditedTrack[]) =>
          shapes(tracks, 4).map((text) => text.replaceAll(/:[^:]* [^:]*?(?= \d+:|$)/g, '')).sort(); // prettier-ignore
        expect(frames(tracksAfter(target, carried))).toEqual(frames(tracksOf(raw, log)));
      }),
      { numRuns: 100, seed: 22 },
    );
  });

  it('need only the tracks near those that they name', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), (raw, list) => {
        const source = { raw: rawTracks(raw), log: logOf(raw, list) };
        const all = again(raw, 1, 0.2);
        const near = placesTouched(source);
        const some = all.filter((track) =>
          track.frame.some((frame, i) => isMeasured(track, i) && near.has(frame, track.xPx[i], track.yPx[i])),
        );
        expect(carryCorrections(source, { tracks: some, nextNumber: raw.count }, EXTENT)).toEqual(
          carryCorrections(source, { tracks: all, nextNumber: raw.count }, EXTENT),
        );
      }),
      { numRuns: 60, seed: 23 },
    );
  });
});

describe('what stands in the way of carrying', () => {
  const frames = (from: number, to: number) => Array.from({ length: to - from + 1 }, (_, i) => from + i);
  const raw = madeTracks([frames(0, 20), frames(0, 20), frames(2, 30)]);
  const carry = (log: LoggedCorrection[], tracks: EditedTrack[]) =>
    carryCorrections({ raw: rawTracks(raw), log }, { tracks, nextNumber: 3 }, EXTENT);
  const own = (...numbers: number[]) => numbers.map((n) => asEdited(trackSlice(raw, n)));
  const cutAt = (n: number, frame: number, number: number): EditedTrack[] => {
    const store = new TrackOverlay(() => asEdited(trackSlice(raw, n)));
    applyOne(store, { kind: 'split', track: n, frame }, number, EXTENT);
    return [store.get(n)!, store.changed.get(number)!];
  };

  it('is nothing where the newer analysis has them right already', () => {
    const log: LoggedCorrection[] = [{ kind: 'split', track: 0, frame: 9, id: 'a' }];
    const { changes, outcomes } = carry(log, [...cutAt(0, 9, 7), ...own(1, 2)]);
    expect(changes).toEqual([]);
    expect(outcomes).toEqual([
      { place: 0, outcome: 'already', reason: 'They are two tracks here, 0 and 7.' },
    ]);
  });

  it('is a tracer that the newer analysis does not have, said with its old number', () => {
    const log: LoggedCorrection[] = [{ kind: 'reclass', track: 1, population: 'trapped', id: 'a' }];
    expect(carry(log, own(0, 2)).outcomes).toEqual([
      { place: 0, outcome: 'left', reason: 'No track here passes where track 1 did.' },
    ]);
  });

  it('is a track that reaches further than the one that was trimmed', () => {
    const short = madeTracks([frames(0, 20), frames(0, 20), frames(2, 20)]);
    const log: LoggedCorrection[] = [{ kind: 'trim', track: 2, from: 2, to: 15, id: 'a' }];
    const { outcomes } = carryCorrections(
      { raw: rawTracks(short), log },
      { tracks: own(0, 1, 2), nextNumber: 3 },
      EXTENT,
    );
    expect(outcomes[0]).toEqual({
      place: 0,
      outcome: 'left',
      reason: 'Track 2 here goes on to frame 30, further than the track that was trimmed.',
    });
  });

  it('keeps all of a gesture back, and what was done to the tracks here for it', () => {
    const log: LoggedCorrection[] = [
      { kind: 'split', track: 0, frame: 9, id: 'a', gesture: 'g' },
      { kind: 'remove', track: 1, id: 'b', gesture: 'g' },
      { kind: 'reclass', track: 0, population: 'free', id: 'c' },
    ];
    // Track 1 is the beginning of a longer one here, of which removing it would take too much.
    const [, , third] = own(0, 1, 2);
    const longer = packTracks([asEdited(trackSlice(madeTracks([frames(0, 39)]), 0))]).tracks;
    const second = asEdited(trackSlice(longer, 0));
    second.xPx = second.xPx.map((x, i) => (i < 15 ? trackSlice(raw, 1).xPx[i] : x + 40));
    second.yPx = second.yPx.map((y, i) => (i < 15 ? trackSlice(raw, 1).yPx[i] : y));
    const { changes, outcomes } = carry(log, [...own(0), { ...second, track: 1 }, third]);
    expect(outcomes.map(({ outcome }) => outcome)).toEqual(['left', 'left', 'carried']);
    expect(outcomes[0].reason).toBe("It was made in one go with correction 2, which can't be carried.");
    expect(outcomes[1].reason).toBe(
      'Of track 1 here only 15 of 40 points are those of the track that was removed.',
    );
    // On the whole of track 0 here, which was not split.
    expect(changes).toEqual([
      { change: { kind: 'reclass', track: 0, population: 'free', from: 0, to: 8 }, of: 2, group: null },
    ]);
  });

  it('gives a class to every piece of a track that is in pieces here, as one gesture', () => {
    const log: LoggedCorrection[] = [{ kind: 'reclass', track: 0, population: 'trapped', id: 'a' }];
    const { changes } = carry(log, [...cutAt(0, 9, 7), ...own(1, 2)]);
    expect(changes).toEqual([
      { change: { kind: 'reclass', track: 0, population: 'trapped' }, of: 0, group: 0 },
      { change: { kind: 'reclass', track: 7, population: 'trapped' }, of: 0, group: 0 },
    ]);
  });

  it('goes on behind what was carried before', () => {
    const log: LoggedCorrection[] = [
      { kind: 'remove', track: 1, id: 'a' },
      { kind: 'remove', track: 2, id: 'b' },
    ];
    const { changes, outcomes } = carryCorrections(
      { raw: rawTracks(raw), log, from: 1 },
      { tracks: own(0, 1, 2), nextNumber: 3 },
      EXTENT,
    );
    expect(changes.map(({ of }) => of)).toEqual([1]);
    expect(outcomes.map(({ place }) => place)).toEqual([1]);
  });
});
