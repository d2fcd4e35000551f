import { trackSlice, type TrackSlice } from '../track-slice';
import type { Tracks } from '../types';
import { applyOne, type RecordingExtent, type TrackStore } from './apply-one';
import { CorrectionRefusal, makesTrack, type LoggedCorrection } from './correction';
import { asEdited, type EditedTrack } from './edited-track';
import { inForce } from './in-force';

/** The machine's tracks by number: 0 to `count - 1`. */
export interface RawTracks {
  count: number;
  track(number: number): TrackSlice | null;
}

export const rawTracks = (tracks: Tracks): RawTracks => ({
  count: tracks.count,
  track: (number) => (number < tracks.count ? trackSlice(tracks, number) : null),
});

/** Tracks laid over others: what was changed here, everything else as below. */
export class TrackOverlay implements TrackStore {
  /** By number; null where the track is gone. */
  readonly changed = new Map<number, EditedTrack | null>();

  constructor(private readonly below: (number: number) => EditedTrack | null) {}

  get(number: number): EditedTrack | null {
    const changed = this.changed.get(number);
    return changed === undefined ? this.below(number) : changed;
  }

  set(number: number, track: EditedTrack | null): void {
    this.changed.set(number, track);
  }
}

/** Where a log of corrections leads. */
export interface CorrectedTracks {
  /** Tracks that differ from the machine's, by number; null where a track is gone. */
  changed: ReadonlyMap<number, EditedTrack | null>;
  /** The track of a number now; null where there is none. */
  get(number: number): EditedTrack | null;
  /** The number that the next new track will get. */
  nextNumber: number;
  /** 1 where a correction of the log is in force. */
  inForce: Uint8Array;
  /** By place in the log: what each correction in force took hold of. */
  effects: ReadonlyMap<number, string>;
  /** By place in the log: corrections in force that can't be made any more, and why. */
  refused: ReadonlyMap<number, CorrectionRefusal>;
}

/**
 * Replays a log of corrections on the machine's tracks.
 *
 * Numbers: a split leaves its number to the earlier part, and the later part takes the next free
 * number; of two joined tracks the one that begins first keeps its number, the other's is retired;
 * a track begun by a person takes the next free number. The next free number counts every
 * correction of the log that ever made a track, in force or not: numbers are never reused, and a
 * split that is taken back and put back has the same number again. The cost is that of the tracks
 * that are touched.
 */
export function applyCorrections(
  raw: RawTracks,
  log: readonly LoggedCorrection[],
  extent: RecordingExtent,
  active: Uint8Array = inForce(log),
): CorrectedTracks {
  const overlay = new TrackOverlay((number) => {
    const slice = raw.track(number);
    return slice && asEdited(slice);
  });
  const effects = new Map<number, string>();
  const refused = new Map<number, CorrectionRefusal>();
  let fresh = raw.count;
  log.forEach((correction, place) => {
    const number = fresh;
    if (makesTrack(correction)) fresh++;
    if (active[place] === 0 || correction.kind === 'undo') return;
    try {
      effects.set(place, applyOne(overlay, correction, number, extent));
    } catch (refusal) {
      if (!(refusal instanceof CorrectionRefusal)) throw refusal;
      refused.set(place, refusal);
    }
  });
  return {
    changed: overlay.changed,
    get: (number) => overlay.get(number),
    nextNumber: fresh,
    inForce: active,
    effects,
    refused,
  };
}

/**
 * The tracks after one more correction at the end of a log.
 *
 * A correction can be taken back, also long after, as long as every later one that is in force
 * still takes hold of the same: the same frames of the same tracks for a split, join, trim or
 * removal, the same end or gap for an added point. Corrections that only set points or populations
 * stand on their own otherwise.
 *
 * @param before what the log led to, where that is known already
 * @throws CorrectionRefusal
 */
export function appendCorrection(
  raw: RawTracks,
  log: readonly LoggedCorrection[],
  next: LoggedCorrection,
  extent: RecordingExtent,
  before: CorrectedTracks = applyCorrections(raw, log, extent),
): CorrectedTracks {
  const longer = [...log, next];
  if (next.kind === 'undo') assertCanBeTakenBack(log, next.of, before.inForce);
  const after = applyCorrections(raw, longer, extent);
  if (next.kind !== 'undo') {
    const refusal = after.refused.get(log.length);
    if (refusal) throw refusal;
    return after;
  }
  const target = log.findIndex(({ id }) => id === next.of);
  const again = log[target].kind === 'undo';
  for (const [place, refusal] of after.refused) {
    // What comes back itself, not what was built on something.
    if (before.inForce[place] === 0) {
      throw new CorrectionRefusal(`Correction ${place + 1} can't be put back: ${refusal.message}`, 'of');
    }
  }
  const dependents = [...before.effects]
    .filter(([place, effect]) => after.inForce[place] === 1 && after.effects.get(place) !== effect)
    .map(([place]) => place);
  if (dependents.length > 0) {
    const names = wordList(dependents.map((place) => String(place + 1)));
    const [noun, verb] = dependents.length === 1 ? ['correction', 'builds'] : ['corrections', 'build'];
    throw new CorrectionRefusal(
      `Correction ${target + 1} can't be ${again ? 'put' : 'taken'} back alone: ${noun} ${names} ${verb} on how tracks are now. Take ${dependents.length === 1 ? 'that' : 'those'} back first.`,
      'of',
      dependents,
    );
  }
  return after;
}

function assertCanBeTakenBack(log: readonly LoggedCorrection[], of: string, active: Uint8Array): void {
  const target = log.findIndex(({ id }) => id === of);
  if (target < 0) throw new CorrectionRefusal('There is no such correction in this analysis.', 'of');
  if (active[target] === 0) {
    throw new CorrectionRefusal(`Correction ${target + 1} was taken back already.`, 'of');
  }
}

const wordList = (words: readonly string[]): string =>
  words.length < 2 ? (words[0] ?? '') : `${words.slice(0, -1).join(', ')} and ${words.at(-1)}`;
