import { ApiError, LINK_LOST } from '@/components/data/api-client';
import { toTrackBlock, type TrackBlock } from '@/components/canvas/track-block';
import type { StoredCorrection } from '@/components/editor/log/stored-correction';
import type { CorrectionsApi, LogAnswer } from '@/components/editor/log/gesture-sender';
import type { GestureStore } from '@/components/editor/log/kept-gestures';
import type { Gesture } from '@/components/editor/log/gesture';
import type { MarksAnswer, StoredMark } from '@/components/editor/log/local-marks';
import type { CorrectionInput } from '@/lib/schemas/correction';
import {
  appendCorrection,
  applyCorrections,
  rawTracks,
  type CorrectedTracks,
} from '@/tracking/corrections/apply-corrections';
import {
  CorrectionRefusal,
  isMark,
  makesTrack,
  type LoggedCorrection,
  type Mark,
} from '@/tracking/corrections/correction';
import { correctedTracks } from '@/tracking/corrections/pieces';
import { NOT_GIVEN } from '@/tracking/corrections/edited-track';
import type { Tracks } from '@/tracking/types';

export const EXTENT = { width: 512, height: 512, frames: 60 };

type Entry = LoggedCorrection &
  StoredCorrection['correction'] & { key: string; by: string; made: number | null };

/** The server's side of corrections on the same pure functions, in memory: what a browser must agree with. */
export class FakeServer {
  readonly log: Entry[] = [];
  closed: string | null = null;

  constructor(readonly raw: Tracks) {}

  private known: { length: number; state: CorrectedTracks } | null = null;

  get state(): CorrectedTracks {
    const { length } = this.log;
    if (this.known?.length !== length) {
      this.known = { length, state: applyCorrections(rawTracks(this.raw), this.log, EXTENT) };
    }
    return this.known.state;
  }

  /** A window of the tracks as they are now. */
  block(from: number, to: number): TrackBlock {
    const { changed } = this.state;
    const { tracks, number } = correctedTracks(this.raw, changed);
    const window = {
      revision: this.log.length,
      from,
      to,
      tracks: [] as number[],
      population: [] as (number | null)[],
      pTrapped: [] as (number | null)[],
      firstFrame: [] as number[],
      lastFrame: [] as number[],
      start: [0],
      frame: [] as number[],
      x: [] as number[],
      y: [] as number[],
      flags: [] as number[],
      given: [] as { track: number; from: number; to: number; population: number }[],
    };
    for (let i = 0; i < tracks.count; i += 1) {
      const [begin, end] = [tracks.start[i], tracks.start[i + 1]];
      let points = 0;
      for (let k = begin; k < end; k += 1) {
        if (tracks.frame[k] < from || tracks.frame[k] > to) continue;
        window.frame.push(tracks.frame[k]);
        window.x.push(tracks.xPx[k]);
        window.y.push(tracks.yPx[k]);
        window.flags.push(tracks.flags[k]);
        points += 1;
      }
      if (points === 0) continue;
      const given = changed.get(number[i])?.given;
      const whole = given?.every((code) => code === given[0]) ? given[0] : NOT_GIVEN;
      window.tracks.push(number[i]);
      window.population.push(whole === NOT_GIVEN ? 2 : whole);
      window.pTrapped.push(null);
      window.firstFrame.push(tracks.frame[begin]);
      window.lastFrame.push(tracks.frame[end - 1]);
      window.start.push(window.frame.length);
      given?.forEach((population, k) => {
        if (population === NOT_GIVEN) return;
        const frame = tracks.frame[begin + k];
        window.given.push({ track: number[i], from: frame, to: frame, population });
      });
    }
    return toTrackBlock(window);
  }

  append(
    by: string,
    key: string,
    corrections: readonly CorrectionInput[],
    revision: number,
  ): StoredCorrection[] {
    const before = this.log.filter((entry) => entry.key === key);
    if (before.length > 0) return before.map((entry) => this.view(entry));
    if (this.closed !== null)
      throw new ApiError(409, 'STATE', `This analysis was signed off by ${this.closed}.`);
    if (revision !== this.log.length) throw new ApiError(412, 'CONFLICT', 'Someone was quicker.');
    const added: Entry[] = [];
    try {
      for (const correction of corrections) {
        const made = makesTrack(correction) ? this.state.nextNumber : null;
        const entry = { ...correction, id: `${key}/${added.length}`, key, by, made } as Entry;
        appendCorrection(rawTracks(this.raw), this.log, entry, EXTENT, this.state);
        this.log.push(entry);
        added.push(entry);
      }
    } catch (refusal) {
      this.log.splice(this.log.length - added.length, added.length);
      if (refusal instanceof CorrectionRefusal) throw new ApiError(422, 'INVALID', refusal.message);
      throw refusal;
    }
    return added.map((entry) => this.view(entry));
  }

  since(revision: number): LogAnswer {
    return {
      revision: this.log.length,
      nextNumber: this.state.nextNumber,
      corrections: this.log.slice(revision).map((entry) => this.view(entry)),
    };
  }

  /** Marks of lines that are in force. */
  marks(): MarksAnswer {
    const { inForce } = this.state;
    const marks = this.log.flatMap((entry, place): StoredMark[] => {
      if (inForce[place] === 0 || !isMark(entry)) return [];
      const mark: Mark =
        entry.kind === 'mark-line'
          ? { kind: entry.kind, frame: entry.frame, points: entry.points }
          : { kind: entry.kind, frame: entry.frame };
      return [{ mark, id: entry.id, gesture: entry.gesture ?? null, by: { id: entry.by, name: entry.by } }];
    });
    return { revision: this.log.length, marks };
  }

  private view(entry: Entry): StoredCorrection {
    const place = this.log.indexOf(entry);
    const { id, gesture, by, made, ...correction } = entry;
    const target = correction.kind === 'undo' ? this.log.find((other) => other.id === correction.of) : null;
    return {
      id,
      revision: place + 1,
      gesture: gesture ?? null,
      correction: correction as StoredCorrection['correction'],
      takenBack: target ?? null,
      by: { id: by, name: `Person ${by}` },
      at: '2026-12-01T09:00:00Z',
      made,
      inForce: this.state.inForce[place] === 1,
    };
  }
}

/** A person's line to the server that can be cut before or after a request does its work. */
export class Line implements CorrectionsApi {
  down = false;
  /** The next answers are lost on their way back; the server has done the work. */
  loseAnswers = 0;

  constructor(
    private readonly server: FakeServer,
    private readonly by: string,
  ) {}

  async append(gesture: Gesture, corrections: readonly CorrectionInput[], revision: number) {
    this.assertUp();
    const stored = this.server.append(this.by, gesture.id, corrections, revision);
    if (this.loseAnswers > 0) {
      this.loseAnswers -= 1;
      throw new ApiError(0, LINK_LOST, 'The link to the server was lost.');
    }
    const { revision: now } = stored[stored.length - 1];
    return { revision: now, nextNumber: this.server.state.nextNumber, corrections: stored };
  }

  async since(revision: number): Promise<LogAnswer> {
    this.assertUp();
    return this.server.since(revision);
  }

  async marks(): Promise<MarksAnswer> {
    this.assertUp();
    return this.server.marks();
  }

  async closedBy(): Promise<string | null> {
    this.assertUp();
    return this.server.closed;
  }

  private assertUp(): void {
    if (this.down) throw new ApiError(0, LINK_LOST, 'The link to the server was lost.');
  }
}

/** What a browser keeps, in memory. */
export class MemoryStore implements GestureStore {
  readonly kept = new Map<string, Gesture>();

  async put(gesture: Gesture): Promise<void> {
    this.kept.set(gesture.id, structuredClone(gesture));
  }

  async delete(id: string): Promise<void> {
    this.kept.delete(id);
  }

  async list(userId: string, analysisId: string): Promise<Gesture[]> {
    return [...this.kept.values()].filter((g) => g.userId === userId && g.analysisId === analysisId);
  }
}
