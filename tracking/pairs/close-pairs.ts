import { countsColumn, numbersColumn } from '../growing-column';
import type { Tracks } from '../types';
import { sweepFrames } from './sweep-frames';

/** A stretch of frames in which two tracks come within reach of each other. */
export interface Meeting {
  /** Track numbers, trackA < trackB. */
  trackA: number;
  trackB: number;
  /** Frame of the least measured separation, and that separation, px. */
  frame: number;
  separationPx: number;
}

/** Meetings in columns: there may be millions. Walking over them makes one short-lived object after the other. */
export class Meetings implements Iterable<Meeting> {
  readonly trackA = countsColumn();
  readonly trackB = countsColumn();
  private readonly frame = countsColumn();
  private readonly separationPx = numbersColumn();
  private readonly last = countsColumn();

  /** @param pairsOnly true where nobody will ask when and how near they were: half the room. */
  constructor(private readonly pairsOnly = false) {}

  get length(): number {
    return this.trackA.length;
  }

  /** @returns its number. */
  begin(trackA: number, trackB: number, frame: number, separationPx: number): number {
    this.trackA.push(trackA);
    this.trackB.push(trackB);
    this.last.push(frame);
    if (!this.pairsOnly) {
      this.frame.push(frame);
      this.separationPx.push(separationPx);
    }
    return this.length - 1;
  }

  /** Takes up that the two are within reach in one more frame. */
  goOn(i: number, frame: number, separationPx: number): void {
    this.last.values[i] = frame;
    if (this.pairsOnly || separationPx >= this.separationPx.values[i]) return;
    this.separationPx.values[i] = separationPx;
    this.frame.values[i] = frame;
  }

  lastFrame(i: number): number {
    return this.last.values[i];
  }

  /** @throws Error where only pairs were kept. */
  *[Symbol.iterator](): Generator<Meeting> {
    if (this.pairsOnly) throw new Error('Of these meetings only the pairs were kept.');
    for (let i = 0; i < this.length; i++) {
      yield {
        trackA: this.trackA.values[i],
        trackB: this.trackB.values[i],
        frame: this.frame.values[i],
        separationPx: this.separationPx.values[i],
      };
    }
  }
}

/** Out of reach for longer than this, two tracks that come near again meet anew. */
const NEW_MEETING_FRAMES = 20;

/**
 * All meetings of chosen tracks within a distance: every frame is sorted into cells as wide as the
 * reach, so only neighbours are compared.
 *
 * @param chosen 1 for tracks to look at.
 * @param reachPx > 0.
 * @param everyFrames only every so many frames are looked at.
 * @param pairsOnly true where only `partnersOf` the meetings is wanted.
 */
export function closePairs(
  tracks: Tracks,
  chosen: Uint8Array,
  image: { width: number; height: number; frames: number },
  reachPx: number,
  everyFrames = 1,
  pairsOnly = false,
): Meetings {
  if (!(reachPx > 0)) throw new RangeError(`reachPx must be > 0. Received ${reachPx}.`);
  // One ring of cells around the image takes positions that lie just outside.
  const cellPx = Math.max(reachPx, 1);
  const columns = Math.ceil(image.width / cellPx) + 2;
  const rows = Math.ceil(image.height / cellPx) + 2;
  const head = new Int32Array(columns * rows).fill(-1);
  const cellOf = (p: number) => {
    const column = Math.max(0, Math.min(columns - 1, 1 + Math.floor(tracks.xPx[p] / cellPx)));
    const row = Math.max(0, Math.min(rows - 1, 1 + Math.floor(tracks.yPx[p] / cellPx)));
    return row * columns + column;
  };
  const meetings = new Meetings(pairsOnly);
  // Meetings that may go on, by pair: those of the frames before are forgotten when none of them may.
  let current = new Map<number, number>();
  let before = new Map<number, number>();
  let forgetAt = NEW_MEETING_FRAMES;

  const meet = (p: number, q: number, trackP: number, trackQ: number, frame: number) => {
    const separationPx = Math.hypot(tracks.xPx[p] - tracks.xPx[q], tracks.yPx[p] - tracks.yPx[q]);
    if (!(separationPx <= reachPx)) return;
    const trackA = Math.min(trackP, trackQ);
    const trackB = Math.max(trackP, trackQ);
    const key = trackA * tracks.count + trackB;
    let meeting = current.get(key) ?? before.get(key);
    if (meeting === undefined || frame - meetings.lastFrame(meeting) > NEW_MEETING_FRAMES) {
      meeting = meetings.begin(trackA, trackB, frame, separationPx);
    } else {
      meetings.goOn(meeting, frame, separationPx);
    }
    current.set(key, meeting);
  };

  let next = new Int32Array(0);
  for (const { frame, count, point, track } of sweepFrames(tracks, chosen, image.frames, everyFrames)) {
    if (frame > forgetAt) {
      [before, current] = [current, new Map()];
      forgetAt = frame + NEW_MEETING_FRAMES;
    }
    if (next.length < count) next = new Int32Array(point.length);
    for (let i = 0; i < count; i++) {
      const cell = cellOf(point[i]);
      for (let dy = -1; dy <= 1; dy++) {
        for (let dx = -1; dx <= 1; dx++) {
          const other = cell + dy * columns + dx;
          if (other < 0 || other >= head.length) continue;
          for (let j = head[other]; j >= 0; j = next[j]) meet(point[i], point[j], track[i], track[j], frame);
        }
      }
      next[i] = head[cell];
      head[cell] = i;
    }
    for (let i = 0; i < count; i++) head[cellOf(point[i])] = -1;
  }
  return meetings;
}

/** Pairs of tracks by their first one: those of track a are `partner[from[a]] .. partner[from[a + 1] - 1]`. */
export interface Partners {
  from: Uint32Array;
  partner: Uint32Array;
}

/** The pairs of tracks that meet, each once however often they do, in a third of the room that meetings take. */
export function partnersOf({ trackA, trackB, length }: Meetings, tracks: number): Partners {
  const from = new Uint32Array(tracks + 1);
  for (let i = 0; i < length; i++) from[trackA.values[i] + 1]++;
  for (let a = 0; a < tracks; a++) from[a + 1] += from[a];
  const partner = new Uint32Array(length);
  const place = from.slice();
  for (let i = 0; i < length; i++) partner[place[trackA.values[i]]++] = trackB.values[i];
  const metBy = new Int32Array(tracks).fill(-1);
  let kept = 0;
  for (let a = 0, k = 0; a < tracks; a++) {
    const end = from[a + 1];
    from[a] = kept;
    for (; k < end; k++) {
      if (metBy[partner[k]] === a) continue;
      metBy[partner[k]] = a;
      partner[kept++] = partner[k];
    }
  }
  from[tracks] = kept;
  return { from, partner };
}
