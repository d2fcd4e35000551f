import { z } from 'zod';
import { REVIEW_STATES, VERDICTS } from '../review/verdict-words';
import { candidateViewSchema } from './analysis-view';
import { itemFields, personSchema } from './common';

const count = z.int();
const verdict = z.enum(VERDICTS);

/** One judgement as it was given; later steps of the same reader took its place. */
export const verdictStepSchema = z.object({
  verdict,
  reason: z.string().nullable(),
  note: z.string().nullable(),
  at: z.iso.datetime(),
});
export type VerdictStepView = z.infer<typeof verdictStepSchema>;

/** The viewer's own verdict on a candidate. */
export const ownVerdictSchema = z.object({
  candidateId: z.uuid(),
  /** Null before the first. */
  verdict: verdict.nullable(),
  reason: z.string().nullable(),
  note: z.string().nullable(),
  /** Oldest first. */
  history: z.array(verdictStepSchema),
  /** To be repeated in `If-Match`. */
  revision: count,
  /** Where the candidate stands, `hidden` while others must not be seen. */
  review: z.enum(REVIEW_STATES),
});
export type OwnVerdictView = z.infer<typeof ownVerdictSchema>;

const pathSchema = z.object({
  track: count,
  /** 0 trapped, 1 free, 2 undecided, null not yet known. */
  population: count.nullable(),
  frame: z.array(count),
  x: z.array(z.number()),
  y: z.array(z.number()),
  bridged: z.array(z.boolean()),
});
export type FilmPathView = z.infer<typeof pathSchema>;

/** A candidate with all that its page on the review desk shows. */
export const candidateDetailSchema = candidateViewSchema.extend({
  film: z.object({
    firstFrame: count,
    frames: count,
    middleFrame: count,
    leftPx: count,
    topPx: count,
    sizePx: count,
    columns: count,
  }),
  paths: z.array(pathSchema),
  own: ownVerdictSchema.nullable(),
});
export type CandidateDetailView = z.infer<typeof candidateDetailSchema>;

/** What was said of a candidate, for those who settle. */
export const readingsViewSchema = z.object({
  candidateId: z.uuid(),
  review: z.enum(REVIEW_STATES),
  verdict: verdict.nullable(),
  readings: z.array(
    verdictStepSchema.extend({
      reader: personSchema,
      blind: z.boolean(),
      history: z.array(verdictStepSchema),
    }),
  ),
  settlements: z.array(z.object({ verdict, reason: z.string(), by: personSchema, at: z.iso.datetime() })),
});
export type ReadingsView = z.infer<typeof readingsViewSchema>;

/** The way through the candidates of an analysis, in the order in which to judge them. */
export const reviewQueueSchema = z.object({
  analysisId: z.uuid(),
  /** How the order comes about. */
  order: z.string(),
  /** How many of them are of rehearsals, of known truth: they measure readers and count in no result. */
  known: count,
  items: z.array(
    z.object({
      id: z.uuid(),
      event: count,
      accepted: z.boolean(),
      own: verdict.nullable(),
      assigned: z.boolean(),
      /** Whether this person is still asked to judge it. */
      waits: z.boolean(),
    }),
  ),
});
export type ReviewQueueView = z.infer<typeof reviewQueueSchema>;

/** An analysis with candidates, and how far they are judged. */
export const reviewSetSchema = z.object({
  ...itemFields,
  analysisId: z.uuid(),
  recordingName: z.string(),
  runName: z.string(),
  campaignId: z.uuid(),
  campaignName: z.string(),
  /** People who must judge each candidate. */
  readings: count,
  candidates: count,
  accepted: count,
  /** Judged by the viewer. */
  own: count,
  /** Waiting for the viewer; 0 for those who do not judge. */
  waiting: count,
  /** Of all readers; null for a reader, who must not know. */
  progress: z.object({ judged: count, disagreed: count, events: count }).nullable(),
  signedOff: z.boolean(),
});
export type ReviewSetView = z.infer<typeof reviewSetSchema>;

export const assignmentViewSchema = z.object({
  ...itemFields,
  analysisId: z.uuid(),
  recordingName: z.string(),
  runName: z.string(),
  reader: personSchema,
  which: z.enum(['all', 'accepted', 'listed']),
  dueOn: z.iso.date().nullable(),
  note: z.string().nullable(),
  assignedBy: personSchema,
  candidates: count,
  judged: count,
  doneAt: z.iso.datetime().nullable(),
});
export type AssignmentView = z.infer<typeof assignmentViewSchema>;

/** A candidate on which readers disagree. */
export const disagreementViewSchema = z.object({
  ...itemFields,
  candidateId: z.uuid(),
  analysisId: z.uuid(),
  recordingName: z.string(),
  runName: z.string(),
  event: count,
  t0_s: z.number(),
  answers: z.array(verdict),
});
export type DisagreementView = z.infer<typeof disagreementViewSchema>;

const kappaSchema = z.object({
  count,
  observed: z.number().nullable(),
  kappa: z.number().nullable(),
  low: z.number().nullable(),
  high: z.number().nullable(),
});
export type KappaView = z.infer<typeof kappaSchema>;

/** How one reader judges, and how well they agree with what was settled and with each other reader. */
export const readerViewSchema = z.object({
  ...itemFields,
  reader: personSchema,
  judged: count,
  yes: count,
  no: count,
  cannotTell: count,
  /** Changes of mind. */
  changed: count,
  /** Against what the principal investigator settled, as far as that was somebody else; blind verdicts alone. */
  settled: kappaSchema,
  /** Of candidates of known truth, which count nowhere else; null before a reader has judged enough to be told. */
  known: z
    .object({ events: count, eventsYes: count, others: count, othersNo: count, cannotTell: count })
    .nullable(),
  /** With each other reader; empty for those who see only themselves. */
  others: z.array(kappaSchema.extend({ reader: personSchema })),
});
export type ReaderView = z.infer<typeof readerViewSchema>;
