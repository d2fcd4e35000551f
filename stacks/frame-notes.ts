import { type StackNote } from './refusal';
import { grouped, ranges } from './sentence';

const framesWord = (frames: readonly number[]) => (frames.length === 1 ? 'Frame' : 'Frames');

/** Gathers what is odd about the pixels of frames, without keeping the frames. People count frames from 1. */
export class FrameNotes {
  private readonly nonFinite: number[] = [];
  private nonFinitePixels = 0;
  private readonly constant = new Map<number, number[]>();
  private first: Float32Array | null = null;
  private identical = true;
  private frames = 0;

  /** @param masked pixels of the frame that were not finite and have been replaced in `counts` */
  add(counts: Float32Array, masked: number, range: { lowest: number; highest: number }): void {
    const number = ++this.frames;
    if (masked > 0) {
      this.nonFinite.push(number);
      this.nonFinitePixels += masked;
    }
    if (range.lowest === range.highest) {
      const same = this.constant.get(range.lowest);
      if (same) same.push(number);
      else this.constant.set(range.lowest, [number]);
    }
    if (!this.first) this.first = counts.slice();
    else this.identical &&= this.first.every((value, i) => value === counts[i]);
  }

  warnings(): StackNote[] {
    const notes: StackNote[] = [];
    const { nonFinite, nonFinitePixels: pixels } = this;
    if (pixels > 0) {
      const what = pixels === 1 ? '1 non-finite pixel was' : `${grouped(pixels)} non-finite pixels were`;
      const detail = `${framesWord(nonFinite)} ${ranges(nonFinite)}: ${what} masked.`;
      notes.push({ code: 'NONFINITE_PIXELS', detail });
    }
    const flat = this.flatDetail();
    if (flat) notes.push({ code: 'NO_SIGNAL', detail: flat });
    return notes;
  }

  private flatDetail(): string | null {
    const flat = [...this.constant.values()].flat().sort((a, b) => a - b);
    if (flat.length === 0) {
      return this.identical && this.frames > 1 ? `Frames 1-${this.frames} are identical.` : null;
    }
    const [value] = this.constant.size === 1 ? this.constant.keys() : [];
    const where = `${framesWord(flat).toLowerCase()} ${ranges(flat)}`;
    return value === undefined ? `All pixels are equal in ${where}.` : `All pixels are ${value} in ${where}.`;
  }
}
