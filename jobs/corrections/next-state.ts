import type { Transaction } from 'sequelize';
import type { Correctable } from '@/models/queries/correctable';
import { loggedOf, type LogRow } from '@/models/queries/correction-log';
import { readEditedTracks } from '@/models/queries/edited-tracks';
import { applyOne } from '@/tracking/corrections/apply-one';
import {
  appendCorrection,
  applyCorrections,
  TrackOverlay,
  type CorrectedTracks,
  type RawTracks,
} from '@/tracking/corrections/apply-corrections';
import { CorrectionRefusal, makesTrack, type LoggedCorrection } from '@/tracking/corrections/correction';
import { sameTrack, type EditedTrack } from '@/tracking/corrections/edited-track';

/** What corrections at the end of a log do to the tracks. */
export interface NextState {
  /** Tracks that become others, by number; null for those that go. */
  changed: Map<number, EditedTrack | null>;
  /** Numbers of these that are what linking made again. */
  asLinked: Set<number>;
  /** By place among the corrections: number of the track that it makes. */
  made: (number | null)[];
  nextNumber: number;
}

/** A refusal, and which of the corrections sent it is about. */
export class RefusedAt extends Error {
  constructor(
    readonly place: number,
    readonly refusal: CorrectionRefusal,
  ) {
    super(refusal.message);
  }
}

/** Tracks that corrections name. */
export function numbersIn(corrections: readonly LoggedCorrection[]): Set<number> {
  const numbers = new Set<number>();
  for (const one of corrections) {
    if ('track' in one && one.track !== null) numbers.add(one.track);
    if (one.kind === 'join') numbers.add(one.with);
  }
  return numbers;
}

function madeBy(corrections: readonly LoggedCorrection[], nextNumber: number) {
  let fresh = nextNumber;
  const made = corrections.map((one) => (makesTrack(one) ? fresh++ : null));
  return { made, nextNumber: fresh };
}

function at<T>(place: number, make: () => T): T {
  try {
    return make();
  } catch (refusal) {
    throw refusal instanceof CorrectionRefusal ? new RefusedAt(place, refusal) : refusal;
  }
}

/**
 * Makes corrections on the tracks as they are now: enough as long as none is taken back, and its cost is
 * that of the tracks named. Same result as replaying the whole log.
 * @throws RefusedAt
 */
export async function applyToCurrent(
  analysis: Correctable,
  fresh: readonly LoggedCorrection[],
  transaction: Transaction,
): Promise<NextState> {
  const current = await readEditedTracks(analysis.id, analysis.revision, numbersIn(fresh), transaction);
  const overlay = new TrackOverlay((number) => current.get(number) ?? null);
  const { made, nextNumber } = madeBy(fresh, analysis.nextNumber);
  fresh.forEach((correction, place) => {
    if (correction.kind === 'undo') return;
    at(place, () => applyOne(overlay, correction, made[place] ?? nextNumber, analysis));
  });
  return { changed: overlay.changed, asLinked: new Set(), made, nextNumber };
}

/** The machine's tracks that a log of corrections touches. */
export async function rawTracksOf(
  analysis: Pick<Correctable, 'id' | 'rawCount'>,
  corrections: readonly LoggedCorrection[],
  transaction?: Transaction,
): Promise<RawTracks> {
  const raw = await readEditedTracks(analysis.id, 0, numbersIn(corrections), transaction);
  return { count: analysis.rawCount, track: (number) => raw.get(number) ?? null };
}

/**
 * Makes corrections at the end of a log by replaying it from the machine's tracks, which taking back asks for.
 * @param checked true where it is known that each can be made in its turn
 * @throws RefusedAt
 */
export async function replay(
  analysis: Correctable,
  rows: readonly LogRow[],
  fresh: readonly LoggedCorrection[],
  transaction: Transaction,
  checked = false,
): Promise<NextState> {
  const log = rows.map(loggedOf);
  const raw = await rawTracksOf(analysis, [...log, ...fresh], transaction);
  const before = applyCorrections(raw, log, analysis);
  let after: CorrectedTracks = before;
  if (checked) {
    after = applyCorrections(raw, [...log, ...fresh], analysis);
    const [refused] = after.refused;
    if (refused) throw new RefusedAt(0, refused[1]);
  } else {
    fresh.forEach((correction, place) => {
      const sofar = [...log, ...fresh.slice(0, place)];
      after = at(place, () => appendCorrection(raw, sofar, correction, analysis, after));
    });
  }
  return { ...difference(raw, before, after), ...madeBy(fresh, analysis.nextNumber) };
}

function difference(raw: RawTracks, before: CorrectedTracks, after: CorrectedTracks) {
  const changed = new Map<number, EditedTrack | null>();
  const asLinked = new Set<number>();
  for (const number of new Set([...before.changed.keys(), ...after.changed.keys()])) {
    const [was, is] = [before.get(number), after.get(number)];
    if (was === is || (was && is && sameTrack(was, is))) continue;
    changed.set(number, is);
    if (is && raw.track(number) && !after.changed.has(number)) asLinked.add(number);
  }
  return { changed, asLinked };
}
