import type { TrackBlock } from '@/components/canvas/track-block';
import type { TrackBlocks } from '@/components/canvas/track-blocks';
import type { ViewerStore } from '@/components/canvas/viewer-store';
import { rebuildBlock } from './block-tracks';
import { ApiError } from '@/components/data/api-client';
import type { Act } from './edit-actions';
import { EditStore, initialEditState } from './edit-state';
import { EditLog } from './log/edit-log';
import type { StoredCorrection } from './log/stored-correction';
import type { Gesture } from './log/gesture';
import { GestureSender, type CorrectionsApi, type LogAnswer } from './log/gesture-sender';
import { orphans, type GestureStore } from './log/kept-gestures';
import { LocalMarks } from './log/local-marks';
import { LocalTracks, type ShownTrack } from './log/local-tracks';
import { filterTest, isEveryTrack } from './track-filter';
import { CorrectionRefusal, isMark } from '@/tracking/corrections/correction';

/** Gestures that are laid over the blocks before these are fetched anew. */
const STEPS_MAX = 200;

export interface SessionOptions {
  analysisId: string;
  userId: string;
  tab: string;
  viewer: ViewerStore;
  extent: { width: number; height: number; frames: number };
  api: CorrectionsApi;
  store: GestureStore;
  newId: () => string;
  /** The log as it is on the server when the page opens. */
  initial: LogAnswer;
  /** Who has signed the analysis off; null while it can be changed. */
  closed: string | null;
  /** Why this person can't change anything; null when they can. */
  readOnly: string | null;
}

/** One person at work on the tracks of one analysis: what is seen, what was done, what waits to be stored. */
export class EditSession {
  readonly state: EditStore;
  /** Blocks of tracks around the frame shown; null until the page is there. */
  blocks: TrackBlocks | null = null;
  readonly tracks: LocalTracks;
  readonly marks = new LocalMarks();
  /** The marks of the server could not be fetched when they should have been. */
  marksBehind = false;
  readonly log: EditLog;
  private readonly sender: GestureSender;
  private readonly corrected = new Set<number>();
  private renewAt = STEPS_MAX;
  private filtered: { from: TrackBlock; filter: unknown; chosen: number | null; block: TrackBlock } | null =
    null;

  constructor(private readonly options: SessionOptions) {
    const { initial, userId, analysisId, tab, newId, extent } = options;
    this.state = new EditStore(initialEditState(initial.revision, options.closed));
    this.tracks = new LocalTracks(() => this.blocks?.kept() ?? [], extent);
    const { tracks, marks } = this;
    this.log = new EditLog({ analysisId, userId, tab, tracks, marks, newId, now: () => new Date() });
    this.log.revision = initial.revision;
    this.log.nextNumber = initial.nextNumber;
    this.log.remember(initial.corrections);
    this.noteCorrected(initial.corrections);
    this.sender = new GestureSender(this.log, options.api, options.store, {
      onLink: (link) => this.state.set({ link }),
      onChange: (change) => this.onServerChange(change.foreign, change.renumbered, change.unseen),
      onAside: () => this.refresh(),
      onClosed: (closed) => this.state.set({ closed }),
    });
    this.refresh();
  }

  /** Takes up what an earlier visit left behind, and sends it. */
  async resume(): Promise<void> {
    const { store, userId, analysisId, tab } = this.options;
    this.sender.open();
    try {
      const kept = await orphans(await store.list(userId, analysisId), tab);
      if (kept.length === 0) return;
      this.log.resume(kept);
      this.state.say(
        `${kept.length === 1 ? 'One correction' : `${kept.length} corrections`} of before were kept here and are sent now.`,
      );
      this.refresh();
    } catch {
      this.state.set({ keeps: false });
    }
    await this.kick();
  }

  /** Why nothing can be changed now; null when it can. */
  get locked(): string | null {
    const { closed } = this.state.get();
    return closed === null
      ? this.options.readOnly
      : `${closed} has signed this analysis off: it can’t be changed.`;
  }

  /** The tracks of the shown frame's block as they are now, all of them or those that the filter shows. */
  block(frame: number, filtered = true): TrackBlock | null {
    const raw = this.blocks?.at(frame) ?? null;
    if (!raw) return null;
    const now = this.tracks.shown(raw);
    const { filter } = this.state.get();
    if (!filtered || isEveryTrack(filter)) return now;
    const chosen = this.options.viewer.get().chosenTrack;
    const { filtered: known } = this;
    if (known && known.from === now && known.filter === filter && known.chosen === chosen) return known.block;
    const passes = filterTest(now, filter, (track) => this.isCorrected(track));
    // The chosen track stays in sight whatever the filter says.
    const block = rebuildBlock(now, (i) => passes(i) || now.track[i] === chosen);
    this.filtered = { from: now, filter, chosen, block };
    return block;
  }

  track(number: number | null): ShownTrack | null {
    return number === null ? null : this.tracks.get(number);
  }

  get chosen(): ShownTrack | null {
    return this.track(this.options.viewer.get().chosenTrack);
  }

  isCorrected(track: number): boolean {
    const stored = () => this.blocks?.kept().some(({ changed }) => changed.has(track)) ?? false;
    return this.corrected.has(track) || this.tracks.touched(track) || stored();
  }

  /** Does something at once and sees to it that it is stored. @returns the gesture; null when it can't be done */
  act({ changes, words }: Act, said?: string): Gesture | null {
    if (this.locked !== null) {
      this.state.say(this.locked, 'refusal');
      return null;
    }
    try {
      const gesture = this.log.make(changes, words, this.options.viewer.get().frame);
      this.keep(gesture);
      this.refresh();
      this.state.say(said ?? done(words));
      return gesture;
    } catch (refusal) {
      if (!(refusal instanceof CorrectionRefusal)) throw refusal;
      this.state.say(refusal.message, 'refusal');
      return null;
    }
  }

  /** Takes back a mark, whoever made it and whenever. */
  takeBack({ key, stored }: { key: string; stored: { id: string } | null }, what: string): void {
    if (this.locked !== null) {
      this.state.say(this.locked, 'refusal');
      return;
    }
    const words = `take back: ${what}`;
    this.keep(this.log.takeBack(key, stored?.id ?? null, words, this.options.viewer.get().frame));
    this.refresh();
    this.state.say(`Taken back: ${what}.`);
  }

  /** Fetches the marks of the server, where those here are older. */
  async renewMarks(): Promise<void> {
    try {
      this.marks.renew(await this.options.api.marks());
      this.marksBehind = false;
      this.refresh();
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      // What is here stays until the link is back.
      this.marksBehind = true;
    }
  }

  undo(): void {
    this.turn((frame) => this.log.undo(frame), 'Taken back', 'There is nothing to take back.');
  }

  redo(): void {
    this.turn((frame) => this.log.redo(frame), 'Done again', 'There is nothing to do again.');
  }

  /** Makes a correction that was set aside on the tracks as they are now. */
  tryAgain(id: string): void {
    try {
      const gesture = this.log.tryAgain(id, this.options.viewer.get().frame);
      if (gesture) {
        this.keep(gesture);
        void this.options.store.delete(id).catch(() => undefined);
      }
      this.state.say(gesture ? done(gesture.words) : 'That is gone.');
    } catch (refusal) {
      if (!(refusal instanceof CorrectionRefusal)) throw refusal;
      this.state.say(refusal.message, 'refusal');
    }
    this.refresh();
  }

  /** Lets a correction go that was set aside. */
  forget(id: string): void {
    this.log.forget(id);
    void this.options.store.delete(id).catch(() => undefined);
    this.refresh();
  }

  /** Sends what waits; to be called when the link may be back. */
  async kick(): Promise<void> {
    await this.sender.kick();
    this.refresh();
  }

  /** Asks for what others have done. @returns whether the server answered */
  async catchUp(): Promise<boolean> {
    const answered = await this.sender.catchUp();
    this.refresh();
    return answered;
  }

  attach(blocks: TrackBlocks | null): void {
    this.blocks = blocks;
    this.blocksChanged();
  }

  /** A block has come in: what waits is shown on it too. */
  blocksChanged(): void {
    this.tracks.forgetOld();
    this.renewAt = this.tracks.stepCount + STEPS_MAX;
    if (this.log.pending.length > 0) this.log.rebuild();
    this.bump();
  }

  /** What is known of the analysis as a whole. */
  news(closed: string | null, staleSince: string | null): void {
    this.state.set({ closed, staleSince });
  }

  close(): void {
    this.sender.close();
  }

  private turn(
    act: (frame: number) => { words: string; gesture: Gesture | null; dropped: string | null } | null,
    said: string,
    nothing: string,
  ): void {
    if (this.locked !== null) {
      this.state.say(this.locked, 'refusal');
      return;
    }
    const turned = act(this.options.viewer.get().frame);
    if (!turned) {
      this.state.say(nothing, 'refusal');
      return;
    }
    if (turned.gesture) this.keep(turned.gesture);
    if (turned.dropped) void this.options.store.delete(turned.dropped).catch(() => undefined);
    this.refresh();
    this.state.say(`${said}: ${turned.words}.`);
  }

  /** Keeps a gesture in the browser, then sends it. */
  private keep(gesture: Gesture): void {
    void this.options.store
      .put(gesture)
      .catch(() => this.state.set({ keeps: false }))
      .then(() => this.kick());
  }

  private onServerChange(
    foreign: readonly StoredCorrection[],
    renumbered: ReadonlyMap<number, number>,
    unseen: boolean,
  ): void {
    const { viewer } = this.options;
    const { chosenTrack } = viewer.get();
    const now = chosenTrack === null ? undefined : renumbered.get(chosenTrack);
    if (now !== undefined) viewer.set({ chosenTrack: now });
    this.noteCorrected(foreign);
    // What someone else did, and what was taken back of an earlier visit, only the server can show.
    if (foreign.length > 0 || unseen) this.blocks?.renew();
    if (foreign.length > 0) this.state.set({ news: newsOf(foreign) });
    // An undo may be of a mark.
    if (
      this.marks.old ||
      foreign.some(({ correction }) => correction.kind === 'undo' || isMark(correction))
    ) {
      void this.renewMarks();
    }
    this.refresh();
  }

  private noteCorrected(corrections: readonly StoredCorrection[]): void {
    for (const { correction, made } of corrections) {
      if ('track' in correction && correction.track !== null) this.corrected.add(correction.track);
      if (made !== null) this.corrected.add(made);
    }
  }

  private refresh(): void {
    const { log, tracks } = this;
    // After many gestures the blocks are fetched anew, with all of them in: each lies over every drawing until then.
    if (tracks.stepCount > this.renewAt && log.pending.length === 0) {
      this.renewAt = tracks.stepCount + STEPS_MAX;
      this.blocks?.renew();
    }
    this.state.set({
      waiting: log.pending.length,
      aside: [...log.aside],
      undoWords: log.undoWords,
      redoWords: log.redoWords,
      revision: log.revision,
    });
    this.bump();
  }

  private bump(): void {
    this.filtered = null;
    this.state.set({ version: this.state.get().version + 1 });
  }
}

/** "Split track 12 before frame 20." */
const done = (words: string): string => `${words.charAt(0).toUpperCase()}${words.slice(1)}: done.`;

function newsOf(foreign: readonly StoredCorrection[]): string {
  const names = [...new Set(foreign.map(({ by }) => by?.name ?? 'Someone'))];
  const who = names.length > 2 ? `${names.length} people` : names.join(' and ');
  return `${who} corrected these tracks: ${foreign.length === 1 ? 'one correction' : `${foreign.length} corrections`}.`;
}
