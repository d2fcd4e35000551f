import { applyOne, type RecordingExtent } from './apply-one';
import { TrackOverlay, type RawTracks } from './apply-corrections';
import { CorrectionRefusal, makesTrack, type LoggedCorrection } from './correction';
import { asEdited, type EditedTrack } from './edited-track';
import { inForce } from './in-force';
import { meantHere, type Change } from './meant-here';
import { NearPlaces, PlacedTracks, placesOf } from './same-place';

/** Corrections of an analysis, and the tracks that linking gave it. */
export interface CarrySource {
  raw: RawTracks;
  log: readonly LoggedCorrection[];
  /** Corrections before this place in the log are only replayed: they were carried before. */
  from?: number;
}

/** Tracks of another analysis of the same recording, as they are now. */
export interface CarryTarget {
  /** At least all that come near a track that the log names, see `placesTouched`. */
  tracks: Iterable<EditedTrack>;
  nextNumber: number;
}

export interface CarriedChange {
  change: Change;
  /** Place in the source's log of the correction that it comes from. */
  of: number;
  /** Changes of one group are one gesture; null for one by itself. */
  group: number | null;
}

/** What became of a correction that is in force. */
export interface CarryOutcome {
  /** Its place in the source's log. */
  place: number;
  outcome: 'carried' | 'already' | 'left';
  /** One sentence where nothing had to be done, or could be. */
  reason: string | null;
}

export interface Carried {
  /** To be appended to the other analysis in this order. */
  changes: CarriedChange[];
  /** Of every correction in force, in their order. */
  outcomes: CarryOutcome[];
}

/**
 * Carries the corrections in force of one analysis to the tracks of another one of the same recording. Both are
 * replayed side by side; each correction is said anew in terms of the tracks here by where and when its tracers are.
 * What belongs to one gesture is carried together or not at all.
 */
export function carryCorrections(source: CarrySource, target: CarryTarget, extent: RecordingExtent): Carried {
  const there = new TrackOverlay((number) => {
    const slice = source.raw.track(number);
    return slice && asEdited(slice);
  });
  const here = new PlacedTracks(target.tracks);
  const active = inForce(source.log);
  const carried: Carried = { changes: [], outcomes: [] };
  let freshThere = source.raw.count;
  let freshHere = target.nextNumber;
  let groups = 0;
  for (let place = 0; place < source.log.length;) {
    const end = endOfGesture(source.log, place);
    const mark = here.mark();
    const freshBefore = freshHere;
    const changes: CarriedChange[] = [];
    const outcomes: CarryOutcome[] = [];
    for (; place < end; place++) {
      const correction = source.log[place];
      const number = freshThere;
      if (makesTrack(correction)) freshThere++;
      if (active[place] === 0 || correction.kind === 'undo') continue;
      if (place >= (source.from ?? 0)) {
        const meaning = meantHere(correction, (n) => there.get(n), here);
        const made = 'changes' in meaning ? meaning.changes : [];
        const refusal = 'left' in meaning ? meaning.left : makeAll(made);
        if (refusal === null) for (const change of made) changes.push({ change, of: place, group: null });
        const reason = refusal ?? ('already' in meaning ? meaning.already : null);
        const done = made.length > 0 ? 'carried' : 'already';
        outcomes.push({ place, outcome: refusal === null ? done : 'left', reason });
      }
      applyOne(there, correction, number, extent);
    }
    const lost = outcomes.find(({ outcome }) => outcome === 'left');
    if (lost) {
      here.backTo(mark);
      freshHere = freshBefore;
      for (const one of outcomes) {
        if (one.outcome !== 'carried') continue;
        one.outcome = 'left';
        one.reason = `It was made in one go with correction ${lost.place + 1}, which can't be carried.`;
      }
    } else {
      const group = changes.length > 1 ? groups++ : null;
      carried.changes.push(...changes.map((one) => ({ ...one, group })));
    }
    carried.outcomes.push(...outcomes);
  }
  return carried;

  /** @returns why they can't be made here; null when they were. */
  function makeAll(changes: readonly Change[]): string | null {
    try {
      for (const change of changes) {
        applyOne(here, change, freshHere, extent);
        if (makesTrack(change)) freshHere++;
      }
      return null;
    } catch (refusal) {
      if (refusal instanceof CorrectionRefusal) return `On the tracks here: ${refusal.message}`;
      throw refusal;
    }
  }
}

function endOfGesture(log: readonly LoggedCorrection[], from: number): number {
  const { gesture } = log[from];
  let end = from + 1;
  while (gesture && end < log.length && log[end].gesture === gesture) end++;
  return end;
}

/** Where the tracks are that a log is about: only tracks near one of these places can matter to `carryCorrections`. */
export function placesTouched({ raw, log }: CarrySource): NearPlaces {
  const near = new NearPlaces();
  const seen = new Set<number>();
  for (const correction of log) {
    if ('x_px' in correction)
      near.add({ frame: correction.frame, xPx: correction.x_px, yPx: correction.y_px });
    const named = correction.kind === 'join' ? [correction.track, correction.with] : [];
    if (correction.kind !== 'join' && 'track' in correction && correction.track !== null)
      named.push(correction.track);
    for (const number of named) {
      const slice = seen.has(number) ? null : raw.track(number);
      seen.add(number);
      if (slice) for (const place of placesOf(asEdited(slice))) near.add(place);
    }
  }
  return near;
}
