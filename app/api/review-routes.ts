import * as review from '@/lib/schemas/review';
import { candidateDetailSchema } from '@/lib/views/review-view';
import * as views from '@/lib/views/review-view';
import { listOf } from '@/lib/views/common';

/** The part of the table of routes in which people judge reconnection candidates. */
export const REVIEW_ROUTES = {
  'GET /reviews': {
    action: 'see-review',
    summary: 'Analyses with candidates, and how far they are judged',
    query: review.reviewListQuery,
    answer: listOf(views.reviewSetSchema),
  },
  'GET /analyses/{analysisId}/review-queue': {
    action: 'review',
    summary: 'Candidates of an analysis in the order in which you should judge them',
    answer: views.reviewQueueSchema,
  },
  'GET /candidates/{candidateId}': {
    action: 'see-data',
    summary: 'A candidate with its tracks and the cut of its film',
    answer: candidateDetailSchema,
  },
  'GET /candidates/{candidateId}/film': {
    action: 'see-data',
    summary: 'Frames around closest approach, cut around it, in rows of one picture; WebP or PNG by Accept',
    media: 'image/webp',
  },
  'GET /candidates/{candidateId}/strip': {
    action: 'see-data',
    summary: 'Frames around closest approach side by side, with both tracks, times and scale bar',
    media: 'image/png',
  },
  'GET /candidates/{candidateId}/verdict': {
    action: 'review',
    summary: 'Your own verdict on a candidate, with its history',
    answer: views.ownVerdictSchema,
  },
  'PUT /candidates/{candidateId}/verdict': {
    action: 'review',
    summary: 'Judge a candidate, or change your mind; what you said before is kept',
    body: review.verdictSchema,
    answer: views.ownVerdictSchema,
    ifMatch: true,
  },
  'GET /candidates/{candidateId}/readings': {
    action: 'settle',
    summary: 'What every reader said of a candidate',
    answer: views.readingsViewSchema,
  },
  'POST /candidates/{candidateId}/settlement': {
    action: 'settle',
    summary: 'Settle a candidate that was judged, with a reason',
    body: review.settlementSchema,
    answer: views.readingsViewSchema,
    status: 201,
  },
  'GET /disagreements': {
    action: 'settle',
    summary: 'Candidates on which readers disagree',
    query: review.disagreementListQuery,
    answer: listOf(views.disagreementViewSchema),
  },
  'GET /assignments': {
    action: 'see-review',
    summary: 'Sets of candidates that were given to readers; a reader sees their own',
    query: review.assignmentListQuery,
    answer: listOf(views.assignmentViewSchema),
  },
  'POST /assignments': {
    action: 'assign-review',
    summary: 'Give candidates of an analysis to a reader',
    body: review.assignmentCreateSchema,
    answer: views.assignmentViewSchema,
    status: 201,
  },
  'DELETE /assignments/{assignmentId}': {
    action: 'assign-review',
    summary: 'Take an assignment back; what was judged stays',
    status: 204,
  },
  'GET /readers': {
    action: 'see-review',
    summary: 'How each reader judges, and Cohen’s kappa against settled verdicts and between readers',
    query: review.readerListQuery,
    answer: listOf(views.readerViewSchema),
  },
} as const;
