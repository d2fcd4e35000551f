import * as compare from '@/lib/schemas/compare';
import { searchQuery, selectionListQuery } from '@/lib/schemas/list-query';
import { exclusionSchema, selectionCreateSchema, selectionPatchSchema } from '@/lib/schemas/selection';
import { listOf } from '@/lib/views/common';
import * as views from '@/lib/views/compare-view';
import { searchViewSchema } from '@/lib/views/search-view';

/** The part of the table of routes that puts runs beside each other and finds things. */
export const COMPARE_ROUTES = {
  'GET /compare': {
    action: 'compare',
    summary: 'Runs of a selection side by side, with the steady law fitted to those of each campaign',
    query: compare.compareQuery,
    answer: views.compareViewSchema,
  },
  'GET /compare/velocity-pdf': {
    action: 'compare',
    summary: 'Velocity distribution pooled over the runs of a selection, each run counted once',
    query: compare.pooledPdfQuery,
    answer: views.pooledPdfSchema,
  },
  'GET /compare/courses': {
    action: 'compare',
    summary: 'Courses over time with the three forms of production, and profiles, of the runs of a selection',
    query: compare.courseQuery,
    answer: views.coursesSchema,
  },
  'GET /selections': {
    action: 'compare',
    summary: 'Saved selections of the laboratory',
    query: selectionListQuery,
    answer: listOf(views.savedSelectionSchema),
  },
  'POST /selections': {
    action: 'save-selection',
    summary: 'Save a selection: filters as they stand in the address of a comparison',
    body: selectionCreateSchema,
    answer: views.savedSelectionSchema,
    status: 201,
  },
  'GET /selections/{selectionId}': {
    action: 'compare',
    summary: 'A saved selection',
    answer: views.savedSelectionSchema,
  },
  'PATCH /selections/{selectionId}': {
    action: 'edit-selection',
    summary: 'Rename a selection or give it other filters',
    body: selectionPatchSchema,
    answer: views.savedSelectionSchema,
    ifMatch: true,
  },
  'DELETE /selections/{selectionId}': {
    action: 'edit-selection',
    summary: 'Remove a saved selection',
    status: 204,
  },
  'PUT /runs/{runId}/exclusion': {
    action: 'leave-out-run',
    summary: 'Leave a run out of fits, with a reason that shows',
    body: exclusionSchema,
    status: 204,
  },
  'DELETE /runs/{runId}/exclusion': {
    action: 'leave-out-run',
    summary: 'Take a run into fits again; that it was left out, and why, stays in the audit trail',
    status: 204,
  },
  'GET /search': {
    action: 'list-records',
    summary: 'Campaigns, runs, recordings and people whose names hold the words',
    query: searchQuery,
    answer: searchViewSchema,
  },
} as const;
