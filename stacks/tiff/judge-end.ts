import { StackRefusal } from '../refusal';

/** What the walk saw of a file whose page list leads outside it. */
export interface BrokenEnd {
  sizeBytes: number;
  /** First byte after all that the readable pages claim. */
  claimedEnd: number;
  /** Largest number of bytes that a readable page occupies. */
  pageBytes: number;
  /** Pages before the first one that is cut. */
  intactPages: number;
  /** Pages of which at least the place is known, the cut one included. */
  knownPages: number;
  /** Whether a page after the cut one is whole. */
  laterPageIntact: boolean;
  /** Byte that can't be reached, and the page whose list entry or data points there. */
  pointsTo: number;
  pointingPage: number;
}

/** A pointer this many times beyond the file's size is nonsense rather than a missing tail. */
const BEYOND_MAX = 64;
const SLACK_BYTES = 64 * 1024;

/**
 * A file that was cut and a file with a wrong pointer look alike: both lead outside. It was cut when
 * the pointer lies where a next page could have stood; it is damaged when the pointer is far away,
 * when no page at all can be read, or when later pages are whole.
 */
function looksCut(end: BrokenEnd): boolean {
  if (end.laterPageIntact) return false;
  if (end.pointsTo < end.sizeBytes) return true;
  if (end.intactPages === 0) return false;
  const near = end.pointsTo <= end.sizeBytes + 2 * end.pageBytes + SLACK_BYTES;
  const tail = end.sizeBytes > end.claimedEnd + 1;
  return near || (tail && end.pointsTo <= BEYOND_MAX * end.sizeBytes);
}

function readablePages(intact: number): string {
  if (intact === 0) return 'No page is readable: upload again.';
  if (intact === 1) return 'Page 1 is readable: use it or upload again.';
  return `Pages 1-${intact} are readable: use them or upload again.`;
}

/** The refusal of a file that ends after `intact` pages, when at least `known` pages were there. */
export function truncatedStack(intact: number, known: number): StackRefusal {
  const cut = intact + 1;
  return new StackRefusal(
    'STACK_TRUNCATED',
    `The file ends inside page ${cut} of at least ${Math.max(cut, known)}. ${readablePages(intact)}`,
    intact > 0 ? { usePages: intact } : {},
  );
}

/** The refusal for a page list or page that leads outside the file. */
export function judgeBrokenEnd(end: BrokenEnd): StackRefusal {
  if (looksCut(end)) return truncatedStack(end.intactPages, end.knownPages);
  return new StackRefusal(
    'TIFF_BAD_OFFSET',
    `Page ${end.pointingPage} points to byte ${end.pointsTo}, but the file has ${end.sizeBytes} bytes.`,
    end.intactPages > 0 ? { usePages: end.intactPages } : {},
  );
}
