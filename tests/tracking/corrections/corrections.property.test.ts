import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { applyOne } from '@/tracking/corrections/apply-one';
import {
  appendCorrection,
  applyCorrections,
  rawTracks,
  TrackOverlay,
  type CorrectedTracks,
} from '@/tracking/corrections/apply-corrections';
import { cutsGesture, undosBackTo } from '@/tracking/corrections/back-to';
import { CorrectionRefusal, makesTrack, type LoggedCorrection } from '@/tracking/corrections/correction';
import { correctedTracks } from '@/tracking/corrections/pieces';
import { isMeasured, type EditedTrack } from '@/tracking/corrections/edited-track';
import { POINT_BRIDGED, type Tracks } from '@/tracking/types';
import { anyCorrection, EXTENT, logged, someTracks } from './made-tracks';

/** Everything that tracks consist of, as bytes. */
function bytesOf(raw: Tracks, state: CorrectedTracks): string {
  const { tracks, number } = correctedTracks(raw, state.changed);
  const given = Array.from(number, (n) => state.get(n)!.given);
  const parts = [number, ...Object.values(tracks).filter((one) => typeof one !== 'number'), ...given];
  return parts
    .map((one) => Buffer.from(one.buffer, one.byteOffset, one.byteLength).toString('hex'))
    .join('|');
}

/** Appends what can be appended; what is refused must leave everything as it was. */
function grow(
  raw: Tracks,
  wishes: (readonly [ReturnType<typeof anyCorrection> extends fc.Arbitrary<infer T> ? T : never, boolean])[],
) {
  const source = rawTracks(raw);
  const log: LoggedCorrection[] = [];
  const states = [applyCorrections(source, [], EXTENT)];
  let gesture = 0;
  for (const [wish, goesOn] of wishes) {
    if (!goesOn) gesture++;
    const entry = logged(wish, log, `g${gesture}`);
    if (!entry) continue;
    const before = bytesOf(raw, states.at(-1)!);
    try {
      const next = appendCorrection(source, log, entry, EXTENT, states.at(-1));
      log.push(entry);
      states.push(next);
    } catch (refusal) {
      if (!(refusal instanceof CorrectionRefusal)) throw refusal;
      expect(refusal.message).toMatch(/^[A-Z].*\.$/);
      expect(bytesOf(raw, applyCorrections(source, log, EXTENT))).toBe(before);
    }
  }
  return { source, log, states };
}

const wishes = () => fc.array(fc.tuple(anyCorrection(), fc.boolean()), { minLength: 1, maxLength: 25 });

describe('corrections of tracks', () => {
  it('leave the same bytes as before when all are taken back, newest first', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), (raw, list) => {
        const { source, log, states } = grow(raw, list);
        const all = [...log];
        for (const undo of undosBackTo(log, 0, () => `u${all.length}`)) {
          const entry = { ...undo, id: `u${all.length}` };
          appendCorrection(source, all, entry, EXTENT);
          all.push(entry);
        }
        expect(bytesOf(raw, applyCorrections(source, all, EXTENT))).toBe(bytesOf(raw, states[0]));
      }),
      { numRuns: 150, seed: 11 },
    );
  });

  it('lead back to any revision by undos, each of which is possible in its turn', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), fc.nat(1000), (raw, list, pick) => {
        const { source, log, states } = grow(raw, list);
        const length = pick % (log.length + 1);
        fc.pre(!cutsGesture(log, length));
        const all = [...log];
        for (const undo of undosBackTo(log, length, () => 'later')) {
          const entry = { ...undo, id: `u${all.length}` };
          appendCorrection(source, all, entry, EXTENT);
          all.push(entry);
        }
        expect(bytesOf(raw, applyCorrections(source, all, EXTENT))).toBe(bytesOf(raw, states[length]));
      }),
      { numRuns: 150, seed: 12 },
    );
  });

  it('give the same tracks replayed from the raw ones as made one by one on the current ones', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), (raw, list) => {
        const { source, log, states } = grow(
          raw,
          list.filter(([{ kind }]) => kind !== 'undo'),
        );
        let current: ReadonlyMap<number, EditedTrack | null> = new Map();
        let fresh = raw.count;
        for (const [i, entry] of log.entries()) {
          if (entry.kind === 'undo') continue;
          const below = current;
          const plain = states[0];
          const store = new TrackOverlay((n) => (below.has(n) ? below.get(n)! : plain.get(n)));
          applyOne(store, entry, fresh, EXTENT);
          if (makesTrack(entry)) fresh++;
          current = new Map([...below, ...store.changed]);
          const replayed = applyCorrections(source, log.slice(0, i + 1), EXTENT);
          expect(bytesOf(raw, { ...replayed, changed: current, get: (n) => store.get(n) })).toBe(
            bytesOf(raw, replayed),
          );
          expect(replayed.nextNumber).toBe(fresh);
        }
      }),
      { numRuns: 100, seed: 13 },
    );
  });

  it('never give a number twice, nor points of one track to two', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), (raw, list) => {
        const { log, states } = grow(raw, list);
        const made = log.filter(makesTrack).length;
        expect(states.at(-1)!.nextNumber).toBe(raw.count + made);
        const { tracks, number } = correctedTracks(raw, states.at(-1)!.changed);
        expect(new Set(number).size).toBe(number.length);
        for (let i = 0; i < tracks.count; i++) {
          const [from, to] = [tracks.start[i], tracks.start[i + 1] - 1];
          expect(tracks.flags[from] & POINT_BRIDGED).toBe(0);
          expect(tracks.flags[to] & POINT_BRIDGED).toBe(0);
          expect(tracks.frame[to] - tracks.frame[from]).toBe(to - from);
          for (let k = from; k <= to; k++) {
            expect(Number.isFinite(tracks.xPx[k]) && Number.isFinite(tracks.yPx[k])).toBe(true);
          }
        }
      }),
      { numRuns: 100, seed: 14 },
    );
  });

  it('keep every measured point of the machine in one track at most', () => {
    fc.assert(
      fc.property(someTracks(), wishes(), (raw, list) => {
        const { states } = grow(raw, list);
        const { number } = correctedTracks(raw, states.at(-1)!.changed);
        const seen = new Set<string>();
        for (const n of number) {
          const track = states.at(-1)!.get(n)!;
          for (let i = 0; i < track.frame.length; i++) {
            if (!isMeasured(track, i) || track.flags[i] !== 0) continue;
            const key = `${track.frame[i]}:${track.yPx[i]}:${track.xPx[i]}`;
            expect(seen.has(key)).toBe(false);
            seen.add(key);
          }
        }
      }),
      { numRuns: 60, seed: 15 },
    );
  });
});
