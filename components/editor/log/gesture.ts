import { isMark, type Correction } from '@/tracking/corrections/correction';

/** A correction as the editor keeps it: an undo may name a gesture that has no id of the server's yet. */
export type EditCorrection =
  Exclude<Correction, { kind: 'undo' }> | { kind: 'undo'; ofGesture: string } | { kind: 'undo'; of: string };

/** What a person did in one go; stored whole or not at all, and taken back whole. */
export interface Gesture {
  /** Also the key under which the server does it once, however often it is sent. */
  id: string;
  analysisId: string;
  userId: string;
  /** The browser tab that made it; another takes it over only when that tab is gone. */
  tab: string;
  /** Revision of the tracks that the person saw. */
  base: number;
  corrections: EditCorrection[];
  /** Numbers of tracks that it makes, in order: provisional ones until it is stored. */
  made: number[];
  /** "split track 12 before frame 20". */
  words: string;
  /** The frame that was shown. */
  frame: number;
  madeAt: string;
}

/** Tracks that the server has not numbered yet are called by numbers from here on. */
export const PROVISIONAL_FROM = 2 ** 31;

export const isProvisional = (track: number): boolean => track >= PROVISIONAL_FROM;

/** A track in words; one that has no number yet by the order in which it was made. */
export const trackName = (track: number): string =>
  isProvisional(track) ? `new track ${track - PROVISIONAL_FROM + 1}` : `track ${track}`;

/** The same corrections with tracks called by other numbers. */
export function renumbered(
  corrections: readonly EditCorrection[],
  numbers: ReadonlyMap<number, number>,
): EditCorrection[] {
  const now = (number: number) => numbers.get(number) ?? number;
  return corrections.map((correction) => {
    if (correction.kind === 'undo' || isMark(correction)) return correction;
    const copy = { ...correction };
    if (copy.track !== null) copy.track = now(copy.track);
    if (copy.kind === 'join') copy.with = now(copy.with);
    return copy;
  });
}

/** Numbers of tracks that corrections name. */
export function tracksNamed(corrections: readonly EditCorrection[]): number[] {
  const named = new Set<number>();
  for (const correction of corrections) {
    if (correction.kind === 'undo' || isMark(correction)) continue;
    if (correction.track !== null) named.add(correction.track);
    if (correction.kind === 'join') named.add(correction.with);
  }
  return [...named];
}
