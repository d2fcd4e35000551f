import { makesTrack, type Correction } from '@/tracking/corrections/correction';
import type { CorrectionInput } from '@/lib/schemas/correction';
import { conflictWords, holdOf, wordsOf } from './conflict-words';
import { conflicts } from './conflicts';
import { PROVISIONAL_FROM, renumbered, tracksNamed, type EditCorrection, type Gesture } from './gesture';
import type { LocalMarks } from './local-marks';
import type { LocalTracks } from './local-tracks';
import type { StoredCorrection } from './stored-correction';

type Change = Exclude<Correction, { kind: 'undo' }>;

/** A gesture that could not be stored, and why. */
export interface AsideGesture {
  gesture: Gesture;
  reason: string;
  /** It can be tried again on the tracks as they are now. */
  again: boolean;
}

/** Something that was done and can be taken back, or was taken back and can be done again. */
interface Deed {
  words: string;
  /** The gesture that did it. */
  gesture: string;
  /** The undo that took it back last. */
  undo: string | null;
  /** A gesture that was taken back before it was sent, to be made anew. */
  dropped: Gesture | null;
}

interface EditLogOptions {
  analysisId: string;
  userId: string;
  tab: string;
  tracks: LocalTracks;
  marks: LocalMarks;
  newId: () => string;
  now: () => Date;
}

/**
 * What one person does to the tracks of an analysis: gestures that are shown at once, wait until the
 * server has stored them, and can be taken back. No I/O: `GestureSender` sends, `KeptGestures` keeps.
 */
export class EditLog {
  /** Of the tracks on the server, as far as it is known here. */
  revision = 0;
  /** Number that the server will give to the next new track at that revision. */
  nextNumber = 0;
  readonly pending: Gesture[] = [];
  readonly aside: AsideGesture[] = [];
  private inFlight: string | null = null;
  private readonly done: Deed[] = [];
  private readonly undone: Deed[] = [];
  /** The server's id of the first correction of each stored gesture. */
  private readonly ids = new Map<string, string>();
  /** Gestures of this visit that are stored. */
  private readonly own = new Set<string>();
  private serial = 0;

  constructor(private readonly options: EditLogOptions) {}

  /**
   * Makes changes and shows them.
   * @throws CorrectionRefusal and changes nothing
   */
  make(changes: readonly Change[], words: string, frame: number): Gesture {
    const made = changes.filter(makesTrack).map(() => PROVISIONAL_FROM + this.serial++);
    const gesture = this.gesture([...changes], made, words, frame);
    this.options.tracks.apply(gesture.id, changes, made);
    this.options.marks.apply(gesture.id, gesture.corrections);
    this.pending.push(gesture);
    this.done.push({ words, gesture: gesture.id, undo: null, dropped: null });
    this.undone.length = 0;
    return gesture;
  }

  /** Words of what undo and redo would do; null where there is nothing. */
  get undoWords(): string | null {
    return this.done.at(-1)?.words ?? null;
  }
  get redoWords(): string | null {
    return this.undone.at(-1)?.words ?? null;
  }

  /**
   * Takes the last deed back. What was not sent yet is simply dropped.
   * @returns what to keep (`gesture`) or forget (`dropped`); null when there is nothing to take back.
   */
  undo(frame: number): { words: string; gesture: Gesture | null; dropped: string | null } | null {
    const deed = this.done.pop();
    if (!deed) return null;
    this.undone.push(deed);
    const last = this.pending.at(-1);
    if (last?.id === deed.gesture && this.inFlight !== last.id) {
      this.pending.pop();
      this.hide(last.id);
      deed.dropped = last;
      return { words: deed.words, gesture: null, dropped: last.id };
    }
    const undo = this.gesture([{ kind: 'undo', ofGesture: deed.gesture }], [], `undo: ${deed.words}`, frame);
    deed.undo = undo.id;
    this.push(undo);
    return { words: deed.words, gesture: undo, dropped: null };
  }

  /**
   * Takes back what was done at any time, by anyone.
   * @param key gesture or correction that did it
   * @param id of a stored correction of it; null for a gesture of this visit
   */
  takeBack(key: string, id: string | null, words: string, frame: number): Gesture {
    const own = this.pending.some((gesture) => gesture.id === key) || this.ids.has(key);
    const undo: EditCorrection =
      id !== null && !own ? { kind: 'undo', of: id } : { kind: 'undo', ofGesture: key };
    const gesture = this.gesture([undo], [], words, frame);
    this.push(gesture);
    this.done.push({ words, gesture: gesture.id, undo: null, dropped: null });
    this.undone.length = 0;
    return gesture;
  }

  /** Does again what was taken back last. */
  redo(frame: number): { words: string; gesture: Gesture | null; dropped: string | null } | null {
    const deed = this.undone.pop();
    if (!deed) return null;
    this.done.push(deed);
    if (deed.dropped) {
      const { corrections, made, words } = deed.dropped;
      const again = this.gesture(corrections, made, words, frame);
      this.push(again);
      Object.assign(deed, { gesture: again.id, dropped: null });
      return { words, gesture: again, dropped: null };
    }
    const last = this.pending.at(-1);
    if (last && last.id === deed.undo && this.inFlight !== last.id) {
      this.pending.pop();
      this.hide(last.id);
      deed.undo = null;
      return { words: deed.words, gesture: null, dropped: last.id };
    }
    const back = this.gesture(
      [{ kind: 'undo', ofGesture: deed.undo! }],
      [],
      `do again: ${deed.words}`,
      frame,
    );
    this.push(back);
    return { words: deed.words, gesture: back, dropped: null };
  }

  /** Takes in what was kept from an earlier visit, in the order in which it was made. */
  resume(kept: readonly Gesture[]): void {
    // What others did since they were made has to be looked through first: the server will say that it is newer.
    this.revision = Math.min(this.revision, ...kept.map(({ base }) => base));
    for (const gesture of kept) {
      for (const number of gesture.made) this.serial = Math.max(this.serial, number - PROVISIONAL_FROM + 1);
      this.pending.push(gesture);
      if (gesture.corrections.every(({ kind }) => kind !== 'undo')) {
        this.done.push({ words: gesture.words, gesture: gesture.id, undo: null, dropped: null });
      }
    }
    this.rebuild();
  }

  /** Own gestures of earlier visits that are in force, so that they can be taken back here too. */
  remember(log: readonly StoredCorrection[]): void {
    const seen = new Set<string>();
    const deeds: Deed[] = [];
    for (const { gesture, by, id, correction, inForce } of log) {
      const key = gesture ?? id;
      if (!this.ids.has(key)) this.ids.set(key, id);
      if (by?.id !== this.options.userId || !inForce || correction.kind === 'undo' || seen.has(key)) continue;
      seen.add(key);
      deeds.push({ words: wordsOf(correction), gesture: key, undo: null, dropped: null });
    }
    this.done.unshift(...deeds);
  }

  /** The gesture to be sent next, with its corrections as the server takes them. */
  next(): { gesture: Gesture; corrections: CorrectionInput[] } | null {
    const [gesture] = this.pending;
    if (!gesture) return null;
    this.inFlight = gesture.id;
    const numbers = new Map(gesture.made.map((number, i) => [number, this.nextNumber + i]));
    const corrections = renumbered(gesture.corrections, numbers).map((correction): CorrectionInput => {
      const input: Correction =
        correction.kind === 'undo' && 'ofGesture' in correction
          ? { kind: 'undo', of: this.ids.get(correction.ofGesture) ?? correction.ofGesture }
          : (correction as Correction);
      return { ...input, gesture: gesture.id };
    });
    return { gesture, corrections };
  }

  /** The gesture on its way has come to an end, or its fate is not known: it is sent again. */
  landed(): void {
    this.inFlight = null;
  }

  /**
   * The server has stored a gesture.
   * @param made numbers that its new tracks have got, in order.
   * @returns the old and new numbers of tracks.
   */
  stored(
    id: string,
    revision: number,
    firstCorrection: string,
    made: readonly number[],
  ): Map<number, number> {
    const at = this.pending.findIndex((gesture) => gesture.id === id);
    this.ids.set(id, firstCorrection);
    this.own.add(id);
    this.revision = Math.max(this.revision, revision);
    if (at < 0) return new Map();
    const [gesture] = this.pending.splice(at, 1);
    const numbers = new Map(gesture.made.map((number, i) => [number, made[i] ?? number]));
    this.rename(numbers);
    this.options.tracks.stored(id, revision);
    this.options.marks.stored(id, revision);
    return numbers;
  }

  /** Someone else's corrections have come in. Those of ours that meet them are set aside. */
  foreign(theirs: readonly StoredCorrection[], revision: number, nextNumber: number): AsideGesture[] {
    this.revision = Math.max(this.revision, revision);
    this.nextNumber = Math.max(this.nextNumber, nextNumber);
    const put: AsideGesture[] = [];
    for (const gesture of [...this.pending]) {
      const since = theirs.filter((other) => other.revision > gesture.base);
      if (!conflicts(gesture.corrections, since.map(holdOf))) continue;
      put.push(...this.setAside(gesture.id, conflictWords(since, gesture), true));
    }
    return put;
  }

  /** A gesture can't be stored: it and everything that builds on it is set aside. */
  setAside(id: string, reason: string, again: boolean): AsideGesture[] {
    const gesture = this.pending.find((other) => other.id === id);
    if (!gesture) return [];
    const put = [this.putAside(gesture, reason, again)];
    const lost = new Set(gesture.made);
    for (const other of [...this.pending]) {
      const builds =
        tracksNamed(other.corrections).some((track) => lost.has(track)) ||
        other.corrections.some((correction) => 'ofGesture' in correction && correction.ofGesture === id);
      if (builds)
        put.push(...this.setAside(other.id, `It builds on "${gesture.words}", which was not stored.`, again));
    }
    return put;
  }

  /** Tries a gesture that was set aside again, on the tracks as they are now. @throws CorrectionRefusal */
  tryAgain(id: string, frame: number): Gesture | null {
    const entry = this.aside.find(({ gesture }) => gesture.id === id);
    if (!entry) return null;
    const changes = entry.gesture.corrections.filter((c): c is Change => c.kind !== 'undo');
    const gesture = this.make(changes, entry.gesture.words, frame);
    this.forget(id);
    return gesture;
  }

  /** Whether a gesture is one's own and stored. */
  knows(id: string): boolean {
    return this.own.has(id);
  }

  /** Whether what a gesture did is shown over the blocks that are here. */
  shows(id: string): boolean {
    return this.options.tracks.stepOf(id) !== null;
  }

  forget(id: string): void {
    const at = this.aside.findIndex(({ gesture }) => gesture.id === id);
    if (at >= 0) this.aside.splice(at, 1);
  }

  /** Shows what waits anew, on blocks that have come in since. What can't be shown still waits. */
  rebuild(): void {
    for (const { id } of this.pending) this.hide(id);
    for (const gesture of this.pending) this.show(gesture);
  }

  private push(gesture: Gesture): void {
    this.pending.push(gesture);
    this.show(gesture);
  }

  private hide(id: string): void {
    this.options.tracks.drop(id);
    this.options.marks.drop(id);
  }

  private show({ id, corrections, made }: Gesture): void {
    const { tracks, marks } = this.options;
    marks.apply(id, corrections);
    const [first] = corrections;
    if (first?.kind === 'undo') {
      // Of a gesture that was made before this visit nothing is known here: the server's tracks will show it.
      const step = 'ofGesture' in first ? tracks.stepOf(first.ofGesture) : null;
      if (step) tracks.takeBack(id, step);
      return;
    }
    try {
      tracks.apply(id, corrections as Change[], made);
    } catch {
      // Tracks that are not here can't be changed here; the server has them.
    }
  }

  private putAside(gesture: Gesture, reason: string, again: boolean): AsideGesture {
    this.pending.splice(this.pending.indexOf(gesture), 1);
    this.hide(gesture.id);
    for (const deeds of [this.done, this.undone]) {
      const at = deeds.findIndex((deed) => deed.gesture === gesture.id);
      if (at >= 0) deeds.splice(at, 1);
    }
    const entry = {
      gesture,
      reason,
      again: again && gesture.corrections.every(({ kind }) => kind !== 'undo'),
    };
    this.aside.push(entry);
    return entry;
  }

  private rename(numbers: ReadonlyMap<number, number>): void {
    if (numbers.size === 0) return;
    this.options.tracks.rename(numbers);
    for (const gesture of this.pending) gesture.corrections = renumbered(gesture.corrections, numbers);
    for (const { dropped } of [...this.done, ...this.undone]) {
      if (dropped) dropped.corrections = renumbered(dropped.corrections, numbers);
    }
  }

  private gesture(corrections: EditCorrection[], made: number[], words: string, frame: number): Gesture {
    const { newId, now, analysisId, userId, tab } = this.options;
    const madeAt = now().toISOString();
    return {
      id: newId(),
      analysisId,
      userId,
      tab,
      base: this.revision,
      corrections,
      made,
      words,
      frame,
      madeAt,
    };
  }
}
