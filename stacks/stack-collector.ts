import { type FrameLayout } from './frame-layout';
import { IndexBuilder } from './index-builder';
import { STACK_LIMITS } from './limits';
import { type ChannelChoice, PageComparison, type PageFacts } from './page-facts';
import { type StackNote, StackRefusal } from './refusal';
import { grouped } from './sentence';
import { type Segments } from './segments';
import { type ArchiveEntryPlace, type IndexedSource, type StackIndex } from './stack-index';
import { type StackMetadata } from './stack-report';

/** One page found by a walker. */
export interface FoundPage {
  facts: PageFacts;
  layout: FrameLayout;
  segments: Segments;
}

/** Where the pages that a walker finds belong. */
export interface PagePlace {
  source: number;
  entry: ArchiveEntryPlace | null;
  /** Name of the file of a folder or of the archive entry; null when the stack is one file. */
  fileName: string | null;
  /** Byte of the source where the file begins, when it lies inside another one as it is. */
  startsAt?: number;
}

/** Gathers the pages of a stack in order, whatever files they come from, and compares them. */
export class StackCollector {
  readonly sources: IndexedSource[] = [];
  readonly warnings: StackNote[] = [];
  metadata: StackMetadata = {};
  /** Bits that carry information, when the file says so. */
  significantBits: number | null = null;
  private readonly builder = new IndexBuilder();
  private readonly comparison = new PageComparison();
  private readonly fileNames: string[] = [];
  private facts: PageFacts | null = null;
  private inverted = false;

  constructor(
    readonly channel: ChannelChoice,
    /** Pages beyond these are left out. */
    readonly pagesMax: number,
    private readonly onPage: (pages: number) => void,
  ) {}

  get pages(): number {
    return this.builder.frames;
  }

  get isFull(): boolean {
    return this.pages >= this.pagesMax;
  }

  /** @throws StackRefusal when the page differs from the ones before, or there are too many. */
  add({ facts, layout, segments }: FoundPage, place: PagePlace): void {
    if (this.pages >= STACK_LIMITS.pages) throw tooManyPages();
    this.comparison.add(facts, this.pages + 1, place.fileName);
    this.facts ??= facts;
    this.inverted ||= layout.invert;
    if (place.fileName !== null) this.fileNames.push(place.fileName);
    const startsAt = place.startsAt ?? 0;
    const offsets = segments.offsets.map((offset) => offset + startsAt);
    const { lengths } = segments;
    this.builder.addFrame({
      source: place.source,
      entry: place.entry,
      layout,
      segments: { offsets, lengths },
    });
    this.onPage(this.pages);
  }

  /** Name of the file that frame `frame` (from 0) lies in, or null when the stack is one file. */
  fileNameOf(frame: number): string | null {
    return this.fileNames[frame] ?? null;
  }

  /** @throws StackRefusal NO_PAGES when nothing was added. */
  build(): StackIndex {
    const { facts } = this;
    if (!facts) throw new StackRefusal('NO_PAGES', 'The file has no image pages.');
    const { width, height, sampleKind, bits } = facts;
    const stated = this.significantBits;
    const counts = sampleKind === 'uint' && !this.inverted;
    const bitDepth = counts && stated !== null && stated >= 8 && stated < bits ? stated : bits;
    const maxCount = { uint: 2 ** bitDepth - 1, int: 2 ** (bits - 1) - 1, float: Infinity }[sampleKind];
    return this.builder.build({ width, height, bitDepth, sampleKind, maxCount }, this.sources);
  }
}

/** The refusal of a stack that goes on beyond the limit. */
export function tooManyPages(): StackRefusal {
  return new StackRefusal(
    'TOO_MANY_PAGES',
    `More than ${grouped(STACK_LIMITS.pages)} pages. Split the stack.`,
  );
}
