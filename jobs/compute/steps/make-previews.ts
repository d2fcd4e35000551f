import { rename, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { openStack } from '@/stacks/open-stack';
import { spreadFrames } from '@/tracking/image-quality/spread-frames';

/** Small enough for a list, large enough to see tracers. */
const PREVIEW_WIDTH_PX = 320;
const PREVIEWS = 4;

export interface PictureFacts {
  /** Counts shown as black and as white. */
  contrast: { low: number; high: number };
  pixelSizeM?: number | null;
  frameIntervalS?: number | null;
}

/** Pictures of a recording for lists: `preview-0.webp` to `preview-3.webp` and `strip.png`, spread over its frames. */
export async function makePreviews(dir: string, { contrast, ...scale }: PictureFacts): Promise<void> {
  // Loaded only here: most computations never draw anything.
  const { encodePreview } = await import('@/stacks/preview');
  const { writeContactStrip } = await import('@/stacks/contact-strip');
  const stack = await openStack(dir);
  try {
    for (const [i, frame] of spreadFrames(stack.frames, PREVIEWS).entries()) {
      const picture = await encodePreview(await stack.readFrame(frame), {
        ...contrast,
        width: PREVIEW_WIDTH_PX,
        format: 'webp',
      });
      const path = join(dir, `preview-${i}.webp`);
      await writeFile(`${path}.part`, picture);
      await rename(`${path}.part`, path);
    }
    await writeContactStrip(dir, stack, { ...contrast, ...scale });
  } finally {
    await stack.close();
  }
}
