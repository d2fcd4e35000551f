import { z } from 'zod';
import type { Action } from '@/lib/access';
import { campaignCreateSchema, campaignPatchSchema } from '@/lib/schemas/campaign';
import { exportCreateSchema } from '@/lib/schemas/export';
import * as lists from '@/lib/schemas/list-query';
import { analysisCreateSchema, recipeCreateSchema, tryRecipeSchema } from '@/lib/schemas/recipe';
import * as recordings from '@/lib/schemas/recording';
import { runCreateSchema, runPatchSchema } from '@/lib/schemas/run';
import * as analysis from '@/lib/views/analysis-view';
import { campaignViewSchema } from '@/lib/views/campaign-view';
import { listOf } from '@/lib/views/common';
import { exportViewSchema } from '@/lib/views/export-view';
import * as lab from '@/lib/views/lab-view';
import { recipeViewSchema } from '@/lib/views/recipe-view';
import { recordingViewSchema, uploadViewSchema } from '@/lib/views/recording-view';
import { runViewSchema } from '@/lib/views/run-view';
import { COMPARE_ROUTES } from './compare-routes';
import { CORRECTION_ROUTES } from './correction-routes';
import { LAB_ROUTES } from './lab-routes';
import { REVIEW_ROUTES } from './review-routes';
import { REHEARSAL_ROUTES } from './rehearsal-routes';

export const METHODS = ['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE'] as const;
export type Method = (typeof METHODS)[number];

/** What is said once about a route: wrapper, OpenAPI document and tests of access all read it here. */
export interface ApiRoute {
  action: Action;
  summary: string;
  query?: z.ZodType;
  body?: z.ZodType;
  /** Schema of the answer's body; left out where it has none or is no JSON. */
  answer?: z.ZodType;
  /** Content type of an answer that is no JSON. */
  media?: string;
  status?: 200 | 201 | 202 | 204;
  ifMatch?: boolean;
  idempotent?: boolean;
  counted?: boolean;
}

const table = (summary: string, media = 'text/csv') =>
  ({ action: 'download-tables', summary, query: recordings.tableQuerySchema, media }) as const;

/** Key: method and path below `/api/v1`. Ids in braces are UUIDs where the name ends in `Id`. */
export const ROUTES = {
  'GET /me': {
    action: 'own-account',
    summary: 'Who you are here, and what you may do',
    answer: lab.meViewSchema,
  },

  'GET /campaigns': {
    action: 'list-records',
    summary: 'Campaigns of the laboratory',
    query: lists.campaignListQuery,
    answer: listOf(campaignViewSchema),
  },
  'POST /campaigns': {
    action: 'create-campaign',
    summary: 'Make a campaign',
    body: campaignCreateSchema,
    answer: campaignViewSchema,
    status: 201,
  },
  'GET /campaigns/{campaignId}': {
    action: 'list-records',
    summary: 'A campaign',
    answer: campaignViewSchema,
  },
  'PATCH /campaigns/{campaignId}': {
    action: 'edit-campaign',
    summary: 'Change a campaign',
    body: campaignPatchSchema,
    answer: campaignViewSchema,
    ifMatch: true,
  },
  'DELETE /campaigns/{campaignId}': {
    action: 'remove',
    summary: 'Remove a campaign; it can be restored',
    status: 204,
  },
  'POST /campaigns/{campaignId}/restore': {
    action: 'restore',
    summary: 'Restore a removed campaign',
    answer: campaignViewSchema,
  },
  'GET /campaigns/{campaignId}/runs': {
    action: 'list-records',
    summary: 'Runs of a campaign',
    query: lists.runListQuery,
    answer: listOf(runViewSchema),
  },
  'POST /campaigns/{campaignId}/runs': {
    action: 'create-run',
    summary: 'Make a run with its conditions',
    body: runCreateSchema,
    answer: runViewSchema,
    status: 201,
  },

  ...COMPARE_ROUTES,

  'GET /runs/{runId}': {
    action: 'list-records',
    summary: 'A run with what follows from its conditions',
    answer: runViewSchema,
  },
  'PATCH /runs/{runId}': {
    action: 'edit-run',
    summary: 'Change a run',
    body: runPatchSchema,
    answer: runViewSchema,
    ifMatch: true,
  },
  'DELETE /runs/{runId}': { action: 'remove', summary: 'Remove a run; it can be restored', status: 204 },
  'POST /runs/{runId}/restore': {
    action: 'restore',
    summary: 'Restore a removed run',
    answer: runViewSchema,
  },
  'GET /runs/{runId}/recordings': {
    action: 'list-records',
    summary: 'Recordings of a run',
    query: lists.recordingListQuery,
    answer: listOf(recordingViewSchema),
  },
  'POST /runs/{runId}/folders': {
    action: 'upload',
    summary: 'Announce a folder of frames: all its files make one recording',
    body: recordings.folderCreateSchema,
    answer: z.object({ id: z.uuid(), recordingId: z.uuid() }),
    status: 201,
  },
  'GET /runs/{runId}/uploads': {
    action: 'list-records',
    summary: 'Unfinished uploads into a run',
    query: lists.uploadListQuery,
    answer: listOf(uploadViewSchema),
  },

  'POST /uploads': {
    action: 'upload',
    summary: 'tus 1.0.0: begin an upload',
    status: 201,
    counted: false,
    idempotent: false,
  },
  'HEAD /uploads/{upload}': { action: 'upload', summary: 'tus 1.0.0: how much has arrived' },
  'PATCH /uploads/{upload}': {
    action: 'upload',
    summary: 'tus 1.0.0: the next piece',
    status: 204,
    counted: false,
  },
  'DELETE /uploads/{upload}': { action: 'end-upload', summary: 'tus 1.0.0: give an upload up', status: 204 },

  'GET /recordings/{recordingId}': {
    action: 'list-records',
    summary: 'A recording',
    answer: recordingViewSchema,
  },
  'PATCH /recordings/{recordingId}': {
    action: 'edit-recording',
    summary: 'Rename a recording, or choose what to use of a refused one',
    body: recordings.recordingPatchSchema,
    answer: recordingViewSchema,
    ifMatch: true,
  },
  'DELETE /recordings/{recordingId}': {
    action: 'remove',
    summary: 'Remove a recording; it can be restored',
    status: 204,
  },
  'POST /recordings/{recordingId}/restore': {
    action: 'restore',
    summary: 'Restore a removed recording',
    answer: recordingViewSchema,
  },
  'GET /recordings/{recordingId}/frames/{frame}': {
    action: 'see-data',
    summary: 'A frame as a picture, WebP or PNG by Accept',
    query: recordings.frameQuerySchema,
    media: 'image/webp',
  },
  'GET /recordings/{recordingId}/strip': {
    action: 'see-data',
    summary: 'Eight frames side by side',
    media: 'image/png',
  },
  'POST /recordings/{recordingId}/try': {
    action: 'try-recipe',
    summary: 'Try a recipe on at most 8 frames',
    body: tryRecipeSchema,
    answer: analysis.tryOutViewSchema,
    idempotent: false,
  },
  'GET /recordings/{recordingId}/analyses': {
    action: 'see-data',
    summary: 'Analyses of a recording',
    query: lists.analysisListQuery,
    answer: listOf(analysis.analysisViewSchema),
  },
  'POST /recordings/{recordingId}/analyses': {
    action: 'start-analysis',
    summary: 'Start an analysis',
    body: analysisCreateSchema,
    answer: analysis.analysisViewSchema,
    status: 201,
  },

  'GET /analyses': {
    action: 'see-data',
    summary: 'Analyses of the laboratory',
    query: lists.analysisListQuery,
    answer: listOf(analysis.analysisViewSchema),
  },
  'GET /analyses/{analysisId}': {
    action: 'see-data',
    summary: 'An analysis with its state and summary',
    answer: analysis.analysisViewSchema,
  },
  'POST /analyses/{analysisId}/stop': {
    action: 'stop-analysis',
    summary: 'Stop an analysis',
    answer: analysis.analysisViewSchema,
  },
  'GET /analyses/{analysisId}/progress': {
    action: 'see-data',
    summary: 'Events named progress with the analysis, until its final state',
    media: 'text/event-stream',
  },
  'GET /analyses/{analysisId}/tracks': {
    action: 'see-data',
    summary: 'Tracks of a window of frames, for drawing',
    query: recordings.trackWindowQuerySchema,
    answer: analysis.trackWindowSchema,
  },
  'GET /analyses/{analysisId}/track-list': {
    action: 'see-data',
    summary: 'Tracks as a list',
    query: lists.trackListQuery,
    answer: listOf(analysis.trackRowSchema),
  },
  'GET /analyses/{analysisId}/measures': {
    action: 'see-data',
    summary: 'Populations, velocity distributions and estimates, for plotting',
    answer: analysis.measuresViewSchema,
  },
  'GET /analyses/{analysisId}/candidates': {
    action: 'see-data',
    summary: 'Pairs of tracks that meet and part',
    query: lists.candidateListQuery,
    answer: listOf(analysis.candidateViewSchema),
  },
  'GET /analyses/{analysisId}/tracks.csv': table('Tracks, a row per track and frame'),
  'GET /analyses/{analysisId}/velocities.csv': table('Velocities at each lag'),
  'GET /analyses/{analysisId}/velocity-pdf.csv': table('Velocity distributions'),
  'GET /analyses/{analysisId}/reconnections.csv': table('Candidates for reconnections'),
  'GET /analyses/{analysisId}/estimates.json': table(
    'Line density and spacing by each method',
    'application/json',
  ),

  'GET /exports': {
    action: 'see-exports',
    summary: 'Data packages, newest first',
    query: lists.exportListQuery,
    answer: listOf(exportViewSchema),
  },
  'POST /exports': {
    action: 'export',
    summary: 'Build a data package of chosen analyses',
    body: exportCreateSchema,
    answer: exportViewSchema,
    status: 202,
  },
  'GET /exports/{exportId}': {
    action: 'see-exports',
    summary: 'A data package with its state; file says where to download it once it is done',
    answer: exportViewSchema,
  },
  'POST /exports/{exportId}/stop': {
    action: 'stop-export',
    summary: 'Stop the building of a data package',
    answer: exportViewSchema,
  },
  'GET /exports/{exportId}/file': {
    action: 'see-exports',
    summary: 'The package itself, whole or by one range of bytes',
    media: 'application/zip',
  },

  'GET /recipes': {
    action: 'see-data',
    summary: 'Saved recipes',
    query: lists.recipeListQuery,
    answer: listOf(recipeViewSchema),
  },
  'POST /recipes': {
    action: 'save-recipe',
    summary: 'Save a recipe, or the next version of one',
    body: recipeCreateSchema,
    answer: recipeViewSchema,
    status: 201,
  },

  ...REVIEW_ROUTES,
  ...REHEARSAL_ROUTES,
  ...CORRECTION_ROUTES,
  ...LAB_ROUTES,
} as const satisfies Record<string, ApiRoute>;

export type RouteKey = keyof typeof ROUTES;

/** Routes without sign-in, by their whole path; everything else on disk must be in the table. */
export const OPEN_PATHS = ['/api/health', '/api/v1/openapi.json', '/api/auth/[...nextauth]'] as const;
