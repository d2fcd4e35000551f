import {
  carryCorrectionsSchema,
  correctionsBodySchema,
  presencePostSchema,
  refinePointSchema,
  restoreRevisionSchema,
  trackPointsQuerySchema,
} from '@/lib/schemas/correction';
import { correctionListQuery } from '@/lib/schemas/list-query';
import { analysisViewSchema } from '@/lib/views/analysis-view';
import * as views from '@/lib/views/correction-view';

/** The part of the table of routes about corrections of tracks and the end of them, the sign-off. */
export const CORRECTION_ROUTES = {
  'GET /analyses/{analysisId}/corrections': {
    action: 'see-data',
    summary: 'Corrections of the tracks, with the revision that the next one must name',
    query: correctionListQuery,
    answer: views.correctionListSchema,
  },
  'POST /analyses/{analysisId}/corrections': {
    action: 'correct-tracks',
    summary: 'Append one correction, or several that are stored all or none',
    body: correctionsBodySchema,
    answer: views.correctionsStoredSchema,
    status: 201,
    ifMatch: true,
  },
  'POST /analyses/{analysisId}/corrections/restore': {
    action: 'correct-tracks',
    summary: 'Lead the tracks back to a revision, by undos that are appended',
    body: restoreRevisionSchema,
    answer: views.correctionsStoredSchema,
    status: 201,
    ifMatch: true,
  },
  'POST /analyses/{analysisId}/corrections/carry': {
    action: 'correct-tracks',
    summary: 'Carry the corrections of another analysis of the same recording here, as far as they can be',
    body: carryCorrectionsSchema,
    answer: views.carryReportSchema,
    ifMatch: true,
  },
  'GET /analyses/{analysisId}/marks': {
    action: 'see-data',
    summary: 'Lines that people marked and frames that they called complete, as they are now',
    answer: views.marksSchema,
  },
  'GET /analyses/{analysisId}/track-points': {
    action: 'see-data',
    summary: 'Some tracks point by point, as they are now',
    query: trackPointsQuerySchema,
    answer: views.trackPointsSchema,
  },
  'POST /analyses/{analysisId}/refine-point': {
    action: 'correct-tracks',
    summary: 'Where the tracer near a place in a frame is, by the fit of the detector',
    body: refinePointSchema,
    answer: views.refinedPointSchema,
    idempotent: false,
  },
  'GET /analyses/{analysisId}/presence': {
    action: 'see-data',
    summary: 'Who has the analysis open',
    answer: views.presencesSchema,
  },
  'POST /analyses/{analysisId}/presence': {
    action: 'see-data',
    summary: 'Say that one has the analysis open, and hear who else has',
    body: presencePostSchema,
    answer: views.presencesSchema,
    idempotent: false,
    counted: false,
  },
  'POST /analyses/{analysisId}/sign-off': {
    action: 'sign-off',
    summary: 'Freeze an analysis with its corrections and verdicts, for good',
    answer: analysisViewSchema,
    ifMatch: true,
  },
  'GET /analyses/{analysisId}/content-hash': {
    action: 'see-data',
    summary: 'The hash of the content as it is now, beside the one that was signed off',
    answer: views.contentHashSchema,
  },
} as const;
