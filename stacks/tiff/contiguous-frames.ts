import { COMPRESSION } from '../frame-layout';
import { STACK_LIMITS } from '../limits';
import { type FoundPage, tooManyPages } from '../stack-collector';
import { StackRefusal } from '../refusal';
import { truncatedStack } from './judge-end';

/**
 * Writers that stay with 32-bit offsets list one page only and put all frames one after the other;
 * a line `images=N` of the description says how many.
 */
export function statedFrames(description: string | null): number {
  const stated = Number(/^images=(\d{1,9})\s*$/m.exec(description ?? '')?.[1] ?? 1);
  const channels = Number(/^channels=(\d{1,9})\s*$/m.exec(description ?? '')?.[1] ?? 1);
  if (channels > 1) {
    throw new StackRefusal(
      'MULTI_CHANNEL',
      `Found ${channels} channels; one time series of one channel is needed.`,
    );
  }
  return stated;
}

/** Whether a page's data is one uncompressed piece, so that frames can follow it. */
function isOnePiece({ layout, segments }: FoundPage): boolean {
  return layout.compression === COMPRESSION.none && segments.offsets.length === 1;
}

/**
 * The frames that follow the only listed page of a file.
 * @param take called with each of them in order; returns false when it has enough
 * @throws StackRefusal STACK_TRUNCATED when the file ends before the last one.
 */
export function followingFrames(
  first: FoundPage,
  frames: number,
  sizeBytes: number,
  take: (page: FoundPage) => boolean,
): void {
  if (frames <= 1 || !isOnePiece(first)) return;
  if (frames > STACK_LIMITS.pages) throw tooManyPages();
  const [offset, length] = [first.segments.offsets[0]!, first.segments.lengths[0]!];
  const held = Math.floor((sizeBytes - offset) / length);
  for (let k = 1; k < Math.min(frames, held); k++) {
    const segments = { offsets: Float64Array.of(offset + k * length), lengths: Float64Array.of(length) };
    if (!take({ ...first, segments })) return;
  }
  if (held < frames) throw truncatedStack(held, frames);
}
