import { z } from 'zod';
import { runConditionsSchema } from './conditions';
import { nameSchema, noteSchema, tagsSchema } from './text';

const runFields = {
  name: nameSchema,
  startedAt: z.iso.datetime({ offset: true, error: 'Start must be a date and time.' }).nullish(),
  tags: tagsSchema.optional(),
  notes: noteSchema.nullish(),
  /** Fields whose unlikely value the person has confirmed. */
  confirm: z.array(z.string().max(60)).max(30).optional(),
};

export const runCreateSchema = runConditionsSchema.extend(runFields);
export const runPatchSchema = runCreateSchema.partial();
export type RunCreate = z.infer<typeof runCreateSchema>;
export type RunPatch = z.infer<typeof runPatchSchema>;
