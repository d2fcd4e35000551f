import { z } from 'zod';
import { CORRECTION_KINDS, type Correction } from '@/tracking/corrections/correction';
import { MARK_POINTS_MOST } from '@/tracking/corrections/marked-frames';

/** Corrections that one request may append: a gesture or a person's queue after a lost connection. */
export const CORRECTIONS_MOST = 500;
const NUMBER_MAX = 2_000_000_000;
const PLACE_MAX_PX = 1_000_000;

const track = (name: string) =>
  z.int(`${name} must be the number of a track.`).min(0, `${name} must be the number of a track.`).max(NUMBER_MAX, `${name} must be the number of a track.`); // prettier-ignore
const frame = (name: string) =>
  z.int(`${name} must be a frame number from 0.`).min(0, `${name} must be a frame number from 0.`).max(NUMBER_MAX, `${name} must be a frame number from 0.`); // prettier-ignore
const place = (name: string) =>
  z.number(`${name} must be a position in pixels.`).min(-PLACE_MAX_PX).max(PLACE_MAX_PX);
const error = (name: string) =>
  z
    .number(`${name} must be a standard error above 0 and at most 10 px.`)
    .gt(0, `${name} must be a standard error above 0 and at most 10 px.`)
    .max(10, `${name} must be a standard error above 0 and at most 10 px.`)
    .optional();

const point = {
  frame: frame('frame'),
  x_px: place('x_px'),
  y_px: place('y_px'),
  /** As refine-point answers them; left out for a point set by eye. */
  sx_px: error('sx_px'),
  sy_px: error('sy_px'),
  brightness: z.number('brightness must be a number of photoelectrons.').min(0).max(1e9).optional(),
};

const linePoint = z.tuple([place('x_px'), place('y_px')], 'Every point must be [x_px, y_px].');
const linePoints = z
  .array(linePoint, 'points must be a list of [x_px, y_px].')
  .min(2, 'A marked line needs at least 2 points.')
  .max(MARK_POINTS_MOST, `At most ${MARK_POINTS_MOST} points in a marked line.`);

/** Corrections sent together under one gesture are taken back together. */
const gesture = z.uuid('gesture must be a UUID.').nullish();

/** One correction as it is sent. */
export const correctionSchema = z.discriminatedUnion(
  'kind',
  [
    z.strictObject({ kind: z.literal('split'), track: track('track'), frame: frame('frame'), gesture }),
    z.strictObject({ kind: z.literal('join'), track: track('track'), with: track('with'), gesture }),
    z.strictObject({ kind: z.literal('trim'), track: track('track'), from: frame('from'), to: frame('to'), gesture }), // prettier-ignore
    z.strictObject({ kind: z.literal('remove'), track: track('track'), gesture }),
    z.strictObject({ kind: z.literal('add-point'), track: track('track').nullable(), ...point, gesture }),
    z.strictObject({ kind: z.literal('move-point'), track: track('track'), ...point, gesture }),
    z.strictObject({
      kind: z.literal('reclass'),
      track: track('track'),
      population: z.enum(['trapped', 'free', 'undecided'], 'population must be trapped, free or undecided.'),
      from: frame('from').optional(),
      to: frame('to').optional(),
      gesture,
    }),
    z.strictObject({ kind: z.literal('mark-line'), frame: frame('frame'), points: linePoints, gesture }),
    z.strictObject({ kind: z.literal('complete-frame'), frame: frame('frame'), gesture }),
    z.strictObject({ kind: z.literal('undo'), of: z.uuid('of must be the id of a correction.'), gesture }),
  ],
  { error: () => `kind must be one of ${CORRECTION_KINDS.join(', ')}.` },
);
export type CorrectionInput = Correction & { gesture?: string | null };

/** One correction, or several that are stored all or none. */
export const correctionsBodySchema = z.union([
  z.strictObject({
    corrections: z
      .array(correctionSchema, 'Send one correction with its kind, or corrections: a list of them.')
      .min(1, 'At least 1 correction.')
      .max(CORRECTIONS_MOST, `At most ${CORRECTIONS_MOST} corrections at once.`),
  }),
  correctionSchema,
]);
export type CorrectionsBody = CorrectionInput | { corrections: CorrectionInput[] };

/** Asks the detector's fit for the position of a tracer near a place in one frame. */
export const refinePointSchema = z.strictObject({
  frame: frame('frame'),
  x_px: place('x_px'),
  y_px: place('y_px'),
});
export type RefinePointInput = z.infer<typeof refinePointSchema>;

/** Leads the tracks back to what they were after so many corrections. */
export const restoreRevisionSchema = z.strictObject({
  revision: z
    .int('revision must be a whole number from 0.')
    .min(0, 'revision must be a whole number from 0.')
    .max(NUMBER_MAX, 'revision must be a whole number from 0.'),
});

/** Carries the corrections of another analysis of the same recording; `preview` only tells what would become. */
export const carryCorrectionsSchema = z.strictObject({
  from: z.uuid('from must be the id of an analysis.'),
  preview: z.boolean('preview must be true or false.').default(false),
});

/** What a person has open, for others to see. */
export const presencePostSchema = z.strictObject({
  place: z
    .enum(
      ['analysis', 'editor', 'verdicts', 'history'],
      'place must be analysis, editor, verdicts or history.',
    )
    .default('analysis'),
  frame: frame('frame').nullish(),
});

/** Tracks asked for point by point at once. */
const TRACKS_MOST = 100;

export const trackPointsQuerySchema = z.strictObject({
  tracks: z
    .string('tracks must be numbers of tracks with commas between them.')
    .regex(/^\d{1,9}(,\d{1,9})*$/, 'tracks must be numbers of tracks with commas between them.')
    .transform((text) => text.split(',').map(Number))
    .refine((numbers) => numbers.length <= TRACKS_MOST, `At most ${TRACKS_MOST} tracks at once.`),
});
