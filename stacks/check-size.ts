import { STACK_LIMITS } from './limits';
import { StackRefusal } from './refusal';

/**
 * @throws StackRefusal BAD_DIMENSIONS for a frame without area, IMAGE_TOO_LARGE beyond 64 megapixels
 *   or for an absurd number of samples.
 */
export function assertFrameSize(
  width: number | undefined,
  height: number | undefined,
  samplesPerPixel: number,
): void {
  for (const [name, value] of [
    ['Width', width],
    ['Height', height],
  ] as const) {
    if (value === undefined) throw new StackRefusal('BAD_DIMENSIONS', `${name} is missing.`);
    if (value === 0) throw new StackRefusal('BAD_DIMENSIONS', `${name} is 0.`);
  }
  const tooLarge = width! * height! > STACK_LIMITS.pixelsPerPage;
  if (tooLarge || samplesPerPixel > STACK_LIMITS.samplesPerPixel) {
    throw new StackRefusal(
      'IMAGE_TOO_LARGE',
      `${width} x ${height} x ${samplesPerPixel} samples exceed the limit of 64 megapixels, 1 sample per page.`,
    );
  }
}
