import { OutOfRangeError } from '../byte-source';
import { STACK_LIMITS } from '../limits';
import { type ChannelChoice } from '../page-facts';
import { StackRefusal } from '../refusal';
import { type FoundPage, tooManyPages } from '../stack-collector';
import { claimOf } from './claimed-bytes';
import { judgeBrokenEnd } from './judge-end';
import { pageSegments } from './page-segments';
import { readPage, type TiffPage } from './read-page';
import { assertDescriptionSize } from './read-description';
import { DirectoryError, type TiffDirectory, type TiffFile } from './tiff-file';

export interface TiffVisitor {
  channel: ChannelChoice;
  /** Called with the first page before anything else is judged. */
  first(directory: TiffDirectory, page: TiffPage): Promise<void>;
  /** Called with each page in order, up to the first one that is cut. @returns false to stop the walk. */
  page(found: FoundPage): boolean;
}

/** A place that leads outside the file: which page points there, and to which byte. */
interface Outside {
  pointingPage: number;
  pointsTo: number;
}

class TiffWalk {
  private intactPages = 0;
  private claimedEnd = 0;
  private pageBytes = 0;
  private segmentsWalked = 0;
  private outside: Outside | null = null;
  private laterPageIntact = false;

  constructor(
    private readonly file: TiffFile,
    private readonly visitor: TiffVisitor,
  ) {}

  async run(): Promise<void> {
    const seen = new Map<number, number>();
    let offset = this.file.firstDirectory;
    if (offset === 0) throw new StackRefusal('NO_PAGES', 'The file has no image pages.');
    for (let page = 1; offset !== 0; page++) {
      if (seen.has(offset)) {
        const back = `The page list loops back to page ${seen.get(offset)}. The file is damaged.`;
        throw new StackRefusal('TIFF_LOOP', back);
      }
      if (page > STACK_LIMITS.pages) throw tooManyPages();
      seen.set(offset, page);
      const directory = await this.directory(offset, page);
      if (!directory) break;
      if (!(await this.page(directory, page))) return;
      offset = directory.next;
    }
    if (this.outside) throw this.judged(this.outside, seen.size);
  }

  private async directory(offset: number, page: number): Promise<TiffDirectory | null> {
    try {
      return await this.file.readDirectory(offset);
    } catch (cause) {
      if (cause instanceof OutOfRangeError) {
        this.outside ??= { pointingPage: Math.max(1, page - 1), pointsTo: offset };
        return null;
      }
      if (cause instanceof DirectoryError) {
        throw new StackRefusal(
          'TIFF_DAMAGED',
          `The list of fields of page ${page} is damaged.`,
          {},
          { cause },
        );
      }
      throw cause;
    }
  }

  /** @returns false when the visitor has enough. */
  private async page(directory: TiffDirectory, page: number): Promise<boolean> {
    try {
      assertDescriptionSize(directory);
      const described = await readPage(this.file, directory, this.visitor.channel);
      if (page === 1) await this.visitor.first(directory, described);
      const segments = await pageSegments(this.file, directory, described, page);
      this.countSegments(segments.offsets.length);
      this.claim(directory, segments);
      if (this.outside) {
        this.laterPageIntact = true;
        return true;
      }
      this.intactPages = page;
      return this.visitor.page({ facts: described.facts, layout: described.layout, segments });
    } catch (cause) {
      // Once a page is cut, what later ones say only serves to tell a cut from a wrong pointer.
      if (this.outside && (cause instanceof StackRefusal || cause instanceof OutOfRangeError)) return true;
      if (!(cause instanceof OutOfRangeError)) throw cause;
      this.outside = { pointingPage: page, pointsTo: cause.offset };
      this.claim(directory, null);
      return true;
    }
  }

  private claim(directory: TiffDirectory, segments: FoundPage['segments'] | null): void {
    const { bytes, end } = claimOf(directory, segments, this.file.sizeBytes);
    this.pageBytes = Math.max(this.pageBytes, bytes);
    this.claimedEnd = Math.max(this.claimedEnd, end);
  }

  private countSegments(count: number): void {
    this.segmentsWalked += count;
    if (this.segmentsWalked > STACK_LIMITS.segmentsWalked) {
      throw new StackRefusal(
        'TOO_MANY_STRIPS',
        'The pages are cut into too many strips. Save with larger strips.',
      );
    }
  }

  private judged(outside: Outside, knownPages: number): StackRefusal {
    const { intactPages, claimedEnd, pageBytes, laterPageIntact } = this;
    const { sizeBytes } = this.file;
    return judgeBrokenEnd({
      sizeBytes,
      claimedEnd,
      pageBytes,
      intactPages,
      knownPages,
      laterPageIntact,
      ...outside,
    });
  }
}

/**
 * Visits the pages of a TIFF file in the order of its page list. Ends for every content: places
 * visited are remembered, counts are bounded, reads outside the file are answers, not faults.
 * @throws StackRefusal with the sentence for the first thing that is wrong.
 */
export async function walkTiff(file: TiffFile, visitor: TiffVisitor): Promise<void> {
  await new TiffWalk(file, visitor).run();
}
