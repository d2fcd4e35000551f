import { z } from 'zod';
import { CORRECTION_KINDS } from '@/tracking/corrections/correction';
import { itemFields, personSchema } from './common';

const count = z.int();
const optional = <T extends z.ZodType>(type: T) => type.optional();

/** A correction as the API tells it: the fields of its kind, and what became of it. */
export const correctionViewSchema = z.object({
  ...itemFields,
  kind: z.enum(CORRECTION_KINDS),
  /** Null for an added point that begins a track. */
  track: optional(count.nullable()),
  with: optional(count),
  frame: optional(count),
  from: optional(count),
  to: optional(count),
  x_px: optional(z.number()),
  y_px: optional(z.number()),
  sx_px: optional(z.number()),
  sy_px: optional(z.number()),
  brightness: optional(z.number()),
  population: optional(z.enum(['trapped', 'free', 'undecided'])),
  /** Of a marked line: [x_px, y_px] of each. */
  points: optional(z.array(z.tuple([z.number(), z.number()]))),
  of: optional(z.uuid()),
  /** The correction of another analysis that was carried here. */
  carriedFrom: optional(z.uuid()),
  gesture: z.uuid().nullable(),
  /** Number of the track that it made. */
  madeTrack: count.nullable(),
  by: personSchema.nullable(),
  /** False once it was taken back. */
  inForce: z.boolean(),
});
export type CorrectionView = z.infer<typeof correctionViewSchema>;

/** Answer to corrections that were stored: `revision` is what the next one must name. */
export const correctionsStoredSchema = z.object({
  revision: count,
  /** Number of the next track that a correction makes. */
  nextTrack: count,
  items: z.array(correctionViewSchema),
});
export type CorrectionsStored = z.infer<typeof correctionsStoredSchema>;

/** A page of the log, with the revision it belongs to. */
export const correctionListSchema = correctionsStoredSchema.extend({ nextCursor: z.string().nullable() });
export type CorrectionList = z.infer<typeof correctionListSchema>;

/** Lines that people marked, and frames that they called complete: marks that are in force. */
export const marksSchema = z.object({
  revision: count,
  items: z.array(
    z.object({
      /** Of the correction, to take it back. */
      id: z.uuid(),
      gesture: z.uuid().nullable(),
      kind: z.enum(['mark-line', 'complete-frame']),
      frame: count,
      points: optional(z.array(z.tuple([z.number(), z.number()]))),
      by: personSchema.nullable(),
      createdAt: z.iso.datetime(),
    }),
  ),
});
export type MarksView = z.infer<typeof marksSchema>;

/** What a tracer's position is, as the detector's fit finds it near a place. */
export const refinedPointSchema = z.object({
  frame: count,
  x_px: z.number(),
  y_px: z.number(),
  sx_px: z.number(),
  sy_px: z.number(),
  brightness: z.number(),
  /** Matched-filter response in units of the local noise. */
  snr: z.number(),
  /** `spot`: the detector finds a spot there; `fit`: it would not have, and this is where one fits best. */
  found: z.enum(['spot', 'fit']),
  movedPx: z.number(),
});
export type RefinedPoint = z.infer<typeof refinedPointSchema>;

/** Someone who has the analysis open. */
export const presenceSchema = z.object({
  person: personSchema,
  /** What they have open: `analysis`, `editor`, `verdicts`, `history`. */
  place: z.string(),
  frame: count.nullable(),
  seenAt: z.iso.datetime(),
});
export const presencesSchema = z.object({ items: z.array(presenceSchema) });
export type PresenceView = z.infer<typeof presenceSchema>;

/** What became of corrections that were carried from another analysis of the same recording. */
export const carryReportSchema = z.object({
  revision: count,
  nextTrack: count,
  /** Corrections that were made here, or would be. */
  carried: count,
  /** Those with nothing to do: the tracks here are so already. */
  already: count,
  /** Corrections at the beginning of that log that were dealt with when it was carried before. */
  before: count,
  /** True where nothing was stored: only asked what would become. */
  preview: z.boolean(),
  left: z.array(z.object({ correction: correctionViewSchema, words: z.string(), reason: z.string() })),
});
export type CarryReport = z.infer<typeof carryReportSchema>;

/** The hash of an analysis's content as it is now, beside the one that was signed. */
export const contentHashSchema = z.object({
  /** SHA-256, hex. */
  contentHash: z.string(),
  /** As signed off; null before. */
  signed: z.string().nullable(),
  same: z.boolean().nullable(),
});
export type ContentHashView = z.infer<typeof contentHashSchema>;

/** Tracks point by point as they are now, with what correcting one of them takes. */
export const trackPointsSchema = z.object({
  revision: count,
  nextTrack: count,
  tracks: z.array(
    z.object({
      track: count,
      frame: z.array(count),
      x_px: z.array(z.number()),
      y_px: z.array(z.number()),
      /** Null where the tracer was missed. */
      sx_px: z.array(z.number().nullable()),
      sy_px: z.array(z.number().nullable()),
      brightness: z.array(z.number().nullable()),
      flags: z.array(count),
      /** Populations that a person gave: first frame, last frame, code. */
      given: z.array(z.tuple([count, count, count])),
    }),
  ),
});
export type TrackPointsView = z.infer<typeof trackPointsSchema>;
