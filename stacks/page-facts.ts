import { type FrameLayout, type SampleKind } from './frame-layout';
import { StackRefusal } from './refusal';
import { pagesAre, shownName } from './sentence';
import { depthName } from './tiff/sample-format';

/** What must be the same on all pages of a stack. */
export interface PageFacts {
  width: number;
  height: number;
  /** Bits of a stored sample. */
  bits: number;
  sampleKind: SampleKind;
  /** Colour channels of a pixel, 1 for grey. */
  channels: number;
}

/** Which channel of colour pages the person chose, if any. */
export type ChannelChoice = number | 'mean' | undefined;

/**
 * The channel to read.
 * @throws StackRefusal COLOUR_PAGES when the pages have several and none of them was chosen.
 */
export function chosenChannel(channels: number, choice: ChannelChoice): FrameLayout['channel'] {
  if (channels === 1) return 0;
  const exists = choice === 'mean' || (Number.isInteger(choice) && choice! >= 0 && choice! < channels);
  if (exists) return choice!;
  throw new StackRefusal(
    'COLOUR_PAGES',
    `Pages have ${channels} colour channels. Choose one channel or the mean.`,
    { channels },
  );
}

/** Compares each page with the first one. */
export class PageComparison {
  private first: PageFacts | null = null;

  /**
   * @param page number of the page in the stack, from 1
   * @param fileName set when pages come from different files
   * @throws StackRefusal MIXED_SIZE or MIXED_DEPTH, naming the first page that differs.
   */
  add(facts: PageFacts, page: number, fileName: string | null): void {
    this.first ??= facts;
    const { first } = this;
    const name = fileName === null ? `Page ${page}` : `Page ${page} (${shownName(fileName)})`;
    if (facts.width !== first.width || facts.height !== first.height) {
      throw new StackRefusal(
        'MIXED_SIZE',
        `${name} is ${facts.width} x ${facts.height}, ${pagesAre(page - 1)} ${first.width} x ${first.height}.`,
      );
    }
    const [depth, firstDepth] = [facts, first].map(
      ({ bits, sampleKind, channels }) =>
        depthName(bits, sampleKind) + (channels > 1 ? ` in ${channels} channels` : ''),
    );
    if (depth !== firstDepth) {
      throw new StackRefusal('MIXED_DEPTH', `${name} is ${depth}, ${pagesAre(page - 1)} ${firstDepth}.`);
    }
  }
}
