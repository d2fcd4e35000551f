import { type ImageQuality } from '@/tracking/image-quality/image-quality';
import { type SampleKind } from './frame-layout';
import { type RefusalOffer, type StackNote } from './refusal';

/** Where a stack lies: one file, or the files of a folder. Names are those the person gave. */
export type StackSource =
  | { kind: 'file'; path: string; name: string }
  | { kind: 'folder'; files: readonly { path: string; name: string }[] };

/** What a file says about itself beyond its pixels: proposals for a person to confirm. */
export interface StackMetadata {
  /** Metres of the object per pixel. */
  pixelSizeM?: number;
  /** Seconds from one frame to the next. */
  frameIntervalS?: number;
}

export interface InspectProgress {
  /** `pages` while the page list is walked, `frames` while pixels are checked, `checksum` at the end. */
  stage: 'pages' | 'frames' | 'checksum';
  done: number;
  /** 0 while unknown. */
  of: number;
}

export interface InspectOptions {
  /** Only the first so many pages make the stack: the answer to a truncated file. */
  usePages?: number;
  /** What to read of colour pages: one channel from 0, or the mean of all. */
  channel?: number | 'mean';
  /** Bytes that an archive may have once expanded. */
  expandedBytesMax?: number;
  onProgress?: (progress: InspectProgress) => void;
  /** Rejects with the signal's reason when it aborts; nothing is left behind. */
  signal?: AbortSignal;
}

/** A stack whose every frame was read once, and whose index now stands in the folder given. */
export interface ReadyStack {
  state: 'ready';
  frames: number;
  width: number;
  height: number;
  /** Bits that carry information. */
  bitDepth: number;
  sampleKind: SampleKind;
  /** Of the file's bytes; for a folder, of the list `<sha256>  <name>\n` in frame order. */
  sha256: string;
  warnings: StackNote[];
  refusal?: undefined;
  metadata: StackMetadata;
  imageQuality: ImageQuality;
}

/** A file that is no usable stack; the folder given is left as it was. */
export interface RefusedStack {
  state: 'refused';
  frames: 0;
  width: 0;
  height: 0;
  bitDepth: 0;
  sampleKind: null;
  sha256: null;
  warnings: StackNote[];
  /** `offer`: how many first pages are intact, or how many colour channels there are to choose from. */
  refusal: StackNote & { offer?: RefusalOffer };
  metadata: StackMetadata;
  imageQuality: null;
}

export type StackReport = ReadyStack | RefusedStack;
