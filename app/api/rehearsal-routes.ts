import * as lists from '@/lib/schemas/list-query';
import { rehearsalCreateSchema } from '@/lib/schemas/rehearsal';
import { listOf } from '@/lib/views/common';
import { rehearsalResultSchema, rehearsalViewSchema } from '@/lib/views/rehearsal-view';

/** The part of the table of routes about rehearsals. */
export const REHEARSAL_ROUTES = {
  'GET /rehearsals': {
    action: 'see-data',
    summary: 'Rehearsals: simulated recordings, and particles planted in real ones',
    query: lists.rehearsalListQuery,
    answer: listOf(rehearsalViewSchema),
  },
  'POST /rehearsals': {
    action: 'make-rehearsal',
    summary: 'Rehearse planned conditions, or plant particles of known truth in a recording',
    body: rehearsalCreateSchema,
    answer: rehearsalViewSchema,
    status: 201,
  },
  'GET /rehearsals/{rehearsalId}': {
    action: 'see-data',
    summary: 'A rehearsal with the comparison of each analysis with its truth',
    answer: rehearsalResultSchema,
  },
  'DELETE /rehearsals/{rehearsalId}': {
    action: 'remove-rehearsal',
    summary: 'Remove a rehearsal that has ended',
    status: 204,
  },
  'POST /rehearsals/{rehearsalId}/stop': {
    action: 'stop-analysis',
    summary: 'Stop a rehearsal, wherever it is',
    answer: rehearsalViewSchema,
  },
} as const;
