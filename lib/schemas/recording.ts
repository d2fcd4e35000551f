import { z } from 'zod';
import { wholeInAddress } from './list-query';
import { nameSchema } from './text';

/** A stack has at most this many pages. */
const PAGES_MAX = 200_000;

/** Choices of a person about a recording. The last two answer a refusal and have the stack checked anew. */
export const recordingPatchSchema = z.strictObject({
  name: nameSchema.optional(),
  /** Use the first so many pages of a stack that ends early. */
  usePages: z.int('usePages must be a whole number.').min(1, 'At least 1 page.').max(PAGES_MAX).optional(),
  /** Of colour pages, the channel from 0, or the mean of all. */
  channel: z
    .union([z.literal('mean'), z.int().min(0).max(15)], 'channel must be "mean" or a number from 0.')
    .optional(),
});
export type RecordingPatch = z.infer<typeof recordingPatchSchema>;

/** A folder of frames that will become one recording. */
export const folderCreateSchema = z.strictObject({
  name: nameSchema,
  files: z
    .int('files must be a whole number.')
    .min(1, 'At least 1 file.')
    .max(PAGES_MAX, 'At most 200,000 files.'),
  bytes: z.int('bytes must be a whole number.').min(1, 'The folder is empty (0 bytes).'),
});

const count = (name: string) => {
  const error = `${name} must be a number.`;
  return z
    .string()
    .regex(/^-?\d{1,12}(\.\d{1,9})?(e[+-]?\d{1,2})?$/i, error)
    .transform(Number)
    .optional();
};

/** How a frame is shown: counts that become black and white, and the width of the picture in pixels. */
export const frameQuerySchema = z
  .strictObject({
    low: count('low'),
    high: count('high'),
    width: wholeInAddress('width must be a whole number from 16 to 4096.', { min: 16, max: 4096 }).optional(),
    scale: z.enum(['linear', 'log'], "scale must be 'linear' or 'log'.").optional(),
  })
  .refine(
    ({ low, high }) => low === undefined || high === undefined || low < high,
    'low must be below high.',
  );
export type FrameQuery = z.infer<typeof frameQuerySchema>;

const frame = (name: string) => wholeInAddress(`${name} must be a frame number from 0.`, { max: PAGES_MAX });

/** Widest window of frames that is answered at once. */
const WINDOW_FRAMES_MAX = 1000;

export const trackWindowQuerySchema = z
  .strictObject({ from: frame('from'), to: frame('to') })
  .refine(({ from, to }) => to >= from && to - from < WINDOW_FRAMES_MAX, {
    error: `to must be from 'from' to at most ${WINDOW_FRAMES_MAX - 1} frames later.`,
    path: ['to'],
  });

export const tableQuerySchema = z.strictObject({
  corrections: z.enum(['none', 'all'], "corrections must be 'none' or 'all'.").default('all'),
});
