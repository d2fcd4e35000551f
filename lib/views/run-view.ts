import { z } from 'zod';
import { runConditionsSchema } from '../schemas/conditions';
import { itemFields, personSchema } from './common';

export const derivedSchema = z.object({
  rhoSRatio: z.number().nullable(),
  vn_m_s: z.number().nullable(),
  vs_m_s: z.number().nullable(),
  vns_m_s: z.number().nullable(),
  alpha: z.number().nullable(),
  expectedSpacing_m: z.number().nullable(),
  stepPerFrame_px: z.number().nullable(),
  settling_m_s: z.number().nullable(),
});

/** Headline numbers of the newest finished analysis in the run. */
export const headlineSchema = z.object({
  analysisId: z.uuid(),
  recordingId: z.uuid(),
  tracks: z.int(),
  trapped: z.int(),
  free: z.int(),
  undecided: z.int(),
  acceptedCandidates: z.int(),
  lineDensity_m2: z.object({ value: z.number(), low: z.number().nullable(), high: z.number().nullable(), method: z.string() }).nullable(), // prettier-ignore
});

/** A run: its conditions flat beside its name, as they are sent. */
export const runViewSchema = runConditionsSchema.extend({
  ...itemFields,
  campaignId: z.uuid(),
  name: z.string(),
  startedAt: z.iso.datetime().nullable(),
  tags: z.array(z.string()),
  notes: z.string().nullable(),
  createdBy: personSchema.nullable(),
  deletedAt: z.iso.datetime().nullable(),
  recordings: z.int(),
  derived: derivedSchema,
  warnings: z.array(z.object({ code: z.string(), detail: z.string(), field: z.string().optional() })),
  headline: headlineSchema.nullable(),
});
export type RunView = z.infer<typeof runViewSchema>;
