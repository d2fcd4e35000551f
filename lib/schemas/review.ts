import { z } from 'zod';
import { VERDICTS } from '../review/verdict-words';
import { listQuery } from './list-query';
import { nameSchema, noteSchema } from './text';

const verdict = z.enum(VERDICTS, 'verdict must be yes, no or cannot-tell.');
const note = noteSchema.pipe(z.string().max(2_000, 'At most 2,000 characters.'));

/** What a reader says of a candidate. */
export const verdictSchema = z.strictObject({
  verdict,
  reason: nameSchema.nullish(),
  note: note.nullish(),
});
export type VerdictInput = z.output<typeof verdictSchema>;

/** What the principal investigator decides, and why. */
export const settlementSchema = z.strictObject({
  verdict,
  reason: noteSchema.pipe(z.string().min(1, 'Say why.').max(2_000, 'At most 2,000 characters.')),
});
export type SettlementInput = z.output<typeof settlementSchema>;

export const assignmentCreateSchema = z
  .strictObject({
    analysis: z.uuid('analysis must be an id.'),
    reader: z.uuid('reader must be the id of a person.'),
    /** Left out: all candidates, or those that are listed. */
    which: z.enum(['all', 'accepted', 'listed'], 'which must be all, accepted or listed.').optional(),
    candidates: z.array(z.uuid()).min(1).max(5_000).optional(),
    dueOn: z.iso.date('dueOn must be a day like 2026-03-31.').nullish(),
    note: note.nullish(),
  })
  .refine(
    ({ which, candidates }) =>
      ((which ?? (candidates ? 'listed' : 'all')) === 'listed') === Boolean(candidates),
    {
      path: ['candidates'],
      message: 'candidates go with which: "listed", and only with it.',
    },
  );
export type AssignmentInput = z.output<typeof assignmentCreateSchema>;

const scope = z.enum(['mine', 'all'], "whose must be 'mine' or 'all'.").default('all');
const state = z.enum(['open', 'done', 'any'], 'state must be open, done or any.').default('any');

export const assignmentListQuery = listQuery(['createdAt', 'updatedAt', 'dueOn'], { whose: scope, state });
export const reviewListQuery = listQuery(['finishedAt', 'candidates', 'updatedAt'], {
  campaign: z.uuid('campaign must be an id.').optional(),
});
export const disagreementListQuery = listQuery(['createdAt'], {
  analysis: z.uuid('analysis must be an id.').optional(),
});
export const readerListQuery = listQuery(['name'], {
  campaign: z.uuid('campaign must be an id.').optional(),
});
