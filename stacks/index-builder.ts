import { type FrameLayout } from './frame-layout';
import { STACK_LIMITS } from './limits';
import { StackRefusal } from './refusal';
import { type Segments } from './segments';
import {
  type ArchiveEntryPlace,
  type IndexedSource,
  RECORD_BYTES,
  type StackIndex,
  type StackShape,
  writeRecord,
} from './stack-index';

/** Where a frame lies, as the page list says. */
export interface FramePlace {
  source: number;
  layout: FrameLayout;
  segments: Segments;
  entry: ArchiveEntryPlace | null;
}

/** Collects frames in order and packs them; memory is that of the packed index. */
export class IndexBuilder {
  private readonly layouts = new Map<string, number>();
  private records = new Uint8Array(256 * RECORD_BYTES);
  private segments = new Float64Array(512);
  private segmentCount = 0;
  frames = 0;

  addFrame({ source, layout, segments, entry }: FramePlace): void {
    const segmentCount = segments.offsets.length;
    if (this.segmentCount + segmentCount > STACK_LIMITS.segments) {
      throw new StackRefusal(
        'TOO_MANY_STRIPS',
        'The pages are cut into more than 16,000,000 strips or tiles. Save with larger strips.',
      );
    }
    this.reserve(segmentCount);
    const record = {
      source,
      layout: this.layoutNumber(layout),
      firstSegment: this.segmentCount,
      segmentCount,
      entry,
    };
    writeRecord(new DataView(this.records.buffer), this.frames * RECORD_BYTES, record);
    for (let i = 0; i < segmentCount; i++) {
      this.segments[2 * (this.segmentCount + i)] = segments.offsets[i]!;
      this.segments[2 * (this.segmentCount + i) + 1] = segments.lengths[i]!;
    }
    this.segmentCount += segmentCount;
    this.frames++;
  }

  /** @param frames how many of the frames added belong to the stack: all, or the intact first ones. */
  build(shape: StackShape, sources: IndexedSource[], frames = this.frames): StackIndex {
    return {
      ...shape,
      frames,
      layouts: Array.from(this.layouts.keys(), (text) => JSON.parse(text) as FrameLayout),
      sources,
      records: this.records.slice(0, frames * RECORD_BYTES),
      segments: this.segments.slice(0, 2 * this.segmentCount),
    };
  }

  private layoutNumber(layout: FrameLayout): number {
    const text = JSON.stringify(layout);
    const known = this.layouts.get(text) ?? this.layouts.size;
    if (known >= STACK_LIMITS.layouts) {
      throw new StackRefusal('MIXED_LAYOUT', 'The pages are stored in more than 1,000 different ways.');
    }
    this.layouts.set(text, known);
    return known;
  }

  private reserve(segmentCount: number): void {
    if ((this.frames + 1) * RECORD_BYTES > this.records.length) {
      const grown = new Uint8Array(this.records.length * 2);
      grown.set(this.records);
      this.records = grown;
    }
    const needed = 2 * (this.segmentCount + segmentCount);
    if (needed > this.segments.length) {
      const grown = new Float64Array(Math.max(needed, this.segments.length * 2));
      grown.set(this.segments);
      this.segments = grown;
    }
  }
}
