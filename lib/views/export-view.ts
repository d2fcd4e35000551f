import { z } from 'zod';
import { EXPORT_FORMATS, EXPORT_STAGES, EXPORT_STATES } from '../exports/export-facts';
import { codedSchema, itemFields, personSchema } from './common';

export const exportViewSchema = z.object({
  ...itemFields,
  title: z.string(),
  description: z.string().nullable(),
  analyses: z.array(z.uuid()),
  formats: z.array(z.enum(EXPORT_FORMATS)),
  figures: z.boolean(),
  licence: z.string(),
  contributors: z.array(
    z.object({ name: z.string(), orcid: z.string().nullable(), affiliation: z.string().nullable() }),
  ),
  state: z.enum(EXPORT_STATES),
  stage: z.enum(EXPORT_STAGES),
  /** 0..1 over all stages. */
  progress: z.number(),
  /** Where to download the package; null until it is done and after it has expired. */
  file: z.string().nullable(),
  fileName: z.string().nullable(),
  bytes: z.number().nullable(),
  sha256: z.string().nullable(),
  error: codedSchema.nullable(),
  createdBy: personSchema.nullable(),
  finishedAt: z.iso.datetime().nullable(),
  expiresAt: z.iso.datetime().nullable(),
});
export type ExportView = z.infer<typeof exportViewSchema>;
