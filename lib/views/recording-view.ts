import { z } from 'zod';
import { codedSchema, itemFields, personSchema, rehearsalMarkSchema } from './common';

export const imageQualitySchema = z.object({
  noiseCounts: z.number(),
  saturatedShare: z.number(),
  driftPx: z.object({ x: z.number(), y: z.number() }).nullable(),
  brightness: z.object({ frame: z.array(z.int()), meanCounts: z.array(z.number()) }),
  low: z.number(),
  high: z.number(),
});

export const recordingViewSchema = z.object({
  ...itemFields,
  runId: z.uuid(),
  campaignId: z.uuid(),
  name: z.string(),
  state: z.enum(['arriving', 'checking', 'ready', 'refused']),
  kind: z.enum(['file', 'folder']),
  bytes: z.int(),
  /** Bytes that have arrived; equals `bytes` once complete. */
  receivedBytes: z.int(),
  /** 0..1 while the stack is being checked. */
  checkProgress: z.number(),
  frames: z.int().nullable(),
  width: z.int().nullable(),
  height: z.int().nullable(),
  bitDepth: z.int().nullable(),
  sha256: z.string().nullable(),
  imageQuality: imageQualitySchema.nullable(),
  metadata: z.object({ pixelSize_m: z.number().nullable(), frameInterval_s: z.number().nullable() }),
  refusal: codedSchema.extend({ usePages: z.int().optional(), channels: z.int().optional() }).nullable(),
  warnings: z.array(codedSchema),
  /** Since when the stored bytes are known not to be those that were sent; null while they are. */
  damage: z.object({ since: z.iso.datetime(), detail: z.string() }).nullable(),
  /** The rehearsal that it was made for; null for what a camera took. */
  rehearsal: rehearsalMarkSchema.nullable(),
  createdBy: personSchema.nullable(),
  deletedAt: z.iso.datetime().nullable(),
  analyses: z.int(),
});
export type RecordingView = z.infer<typeof recordingViewSchema>;

/** An upload that its sender can go on with. */
export const uploadViewSchema = z.object({
  id: z.string(),
  recordingId: z.uuid(),
  runId: z.uuid(),
  folderId: z.uuid().nullable(),
  position: z.int().nullable(),
  filename: z.string(),
  bytes: z.int(),
  receivedBytes: z.int(),
  expiresAt: z.iso.datetime().nullable(),
});
export type UploadView = z.infer<typeof uploadViewSchema>;
