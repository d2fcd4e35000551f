import { z } from 'zod';
import { EXPORT_ANALYSES_MOST, EXPORT_FORMATS } from '../exports/export-facts';
import { LICENCE_IDS } from '../exports/licences';
import { isOrcid } from '../exports/orcid';
import { nameSchema, noteSchema } from './text';

export const CONTRIBUTORS_MOST = 50;

export const contributorSchema = z.strictObject({
  name: nameSchema,
  /** As 0000-0002-1825-0097, with or without the address before it. */
  orcid: z
    .string()
    .trim()
    .transform((text) => text.replace(/^https?:\/\/orcid\.org\//, '').toUpperCase())
    .refine((text) => text === '' || isOrcid(text), 'This is no ORCID iD: its check digit does not fit.')
    .optional(),
  affiliation: nameSchema.optional(),
});
export type ContributorInput = z.output<typeof contributorSchema>;

/** What goes into a package. */
export const exportCreateSchema = z.strictObject({
  analyses: z
    .array(z.uuid('analyses must be ids of analyses.'), 'Choose at least one analysis.')
    .min(1, 'Choose at least one analysis.')
    .max(EXPORT_ANALYSES_MOST, `At most ${EXPORT_ANALYSES_MOST} analyses in one package.`)
    .refine((ids) => new Set(ids).size === ids.length, 'Name each analysis once.'),
  formats: z
    .array(z.enum(EXPORT_FORMATS, `formats must be of ${EXPORT_FORMATS.join(', ')}.`))
    .min(1, 'Choose at least one format.')
    .max(EXPORT_FORMATS.length, 'Name each format once.')
    .refine((formats) => new Set(formats).size === formats.length, 'Name each format once.')
    .default(['csv']),
  figures: z.boolean('figures must be true or false.').default(true),
  licence: z.enum(LICENCE_IDS, `licence must be one of ${LICENCE_IDS.join(', ')}.`).default(LICENCE_IDS[0]),
  title: nameSchema.optional(),
  description: noteSchema.optional(),
  contributors: z
    .array(contributorSchema)
    .max(CONTRIBUTORS_MOST, `At most ${CONTRIBUTORS_MOST} contributors.`)
    .optional(),
});
export type ExportCreate = z.output<typeof exportCreateSchema>;
