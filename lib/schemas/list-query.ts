import { z } from 'zod';
import { EXPORT_STATES } from '../exports/export-facts';
import { MAIL_STATES } from '../mail/mail-kinds';

export const LIST_LIMIT = 50;
export const LIST_LIMIT_MAX = 200;

const limitError = `limit must be a whole number from 1 to ${LIST_LIMIT_MAX}.`;

/** A whole number as it stands in an address. */
export const wholeInAddress = (error: string, { min = 0, max = Number.MAX_SAFE_INTEGER } = {}) =>
  z
    .string()
    .regex(/^-?\d{1,15}$/, error)
    .transform(Number)
    .pipe(z.number().min(min, error).max(max, error));

/**
 * Parameters that every list takes, with the fields it can be sorted by and its own filters. The
 * first field is the usual one; `-field` turns the order round.
 */
export function listQuery<F extends z.ZodRawShape>(sortFields: readonly [string, ...string[]], filters: F) {
  return z.strictObject({
    limit: wholeInAddress(limitError, { min: 1, max: LIST_LIMIT_MAX }).default(LIST_LIMIT),
    cursor: z.string().max(2_000, 'This cursor is not one of ours.').optional(),
    sort: z
      .string()
      .refine((sort) => sortFields.includes(sort.replace(/^-/, '')), {
        error: (issue) => `Unknown sort field '${String(issue.input).slice(0, 60)}'.`,
      })
      .default(usualSort(sortFields[0])),
    ...filters,
  });
}

export interface ListQuery {
  limit: number;
  cursor?: string;
  sort: string;
}

const text = z.string().trim().max(200, 'At most 200 characters.').optional();

/** `deleted=only` shows what was removed and can be restored. */
const deleted = z.enum(['no', 'only'], "deleted must be 'no' or 'only'.").default('no');

const states = <const T extends readonly [string, ...string[]]>(all: T) =>
  z.enum(all, `state must be one of ${all.join(', ')}.`).optional();

const day = (name: string) => z.iso.date(`${name} must be a day like 2026-03-31.`).optional();

const idFilter = (name: string) => z.uuid(`${name} must be an id.`).optional();

export const campaignListQuery = listQuery(['createdAt', 'updatedAt', 'name', 'runs', 'recordings'], {
  q: text,
  tag: text,
  deleted,
});

export const runListQuery = listQuery(
  ['createdAt', 'updatedAt', 'name', 'startedAt', 'temperature_K', 'heatFlux_W_m2', 'recordings'],
  { q: text, tag: text, drive: text, deleted },
);

export const recordingListQuery = listQuery(['createdAt', 'updatedAt', 'name', 'bytes', 'frames', 'state'], {
  q: text,
  state: states(['arriving', 'checking', 'ready', 'refused']),
  deleted,
});

export const analysisListQuery = listQuery(['createdAt', 'updatedAt', 'finishedAt', 'state', 'tracks'], {
  state: states(['waiting', 'running', 'done', 'failed', 'stopped']),
  campaign: idFilter('campaign'),
  run: idFilter('run'),
  recording: idFilter('recording'),
  /** `no` leaves out what was made for rehearsals, `only` shows nothing else. */
  rehearsals: z.enum(['no', 'only'], "rehearsals must be 'no' or 'only'.").optional(),
});

export const trackListQuery = listQuery(
  ['track', 'firstFrame', 'points', 'meanSpeed_m_s', 'pTrapped', 'brightness'],
  {
    population: z
      .enum(['trapped', 'free', 'undecided'], 'population must be trapped, free or undecided.')
      .optional(),
  },
);

const wholeFilter = (name: string) => wholeInAddress(`${name} must be a whole number from 0.`).optional();

export const correctionListQuery = listQuery(['revision'], {
  /** Only those appended after a revision. */
  after: wholeFilter('after'),
  /** Only those that name a track, or made it. */
  track: wholeFilter('track'),
});

export const candidateListQuery = listQuery(['event', 't0_s', 'qValue', 'minSeparation_m'], {
  accepted: z.enum(['true', 'false'], 'accepted must be true or false.').optional(),
});

export const rehearsalListQuery = listQuery(['createdAt', 'updatedAt', 'name'], { q: text });
export const recipeListQuery = listQuery(['createdAt', 'name'], { q: text });
export const memberListQuery = listQuery(['name', 'createdAt'], { q: text });
export const tokenListQuery = listQuery(['createdAt', 'name', 'lastUsedAt'], {});
export const jobListQuery = listQuery(['createdAt', 'updatedAt'], {
  state: states(['waiting', 'running', 'done', 'failed', 'stopped']),
  kind: text,
});
/** `action` is one kind of act, as `run.removed`, or all about one kind of thing, as `run`. */
const auditFilters = {
  action: z
    .string()
    .regex(/^[a-z-]{1,40}(\.[a-z-]{1,40})?$/, 'action must be like run.removed, or run.')
    .optional(),
  person: idFilter('person'),
  /** Words in the name of who did it, of what it was done to, or in what was done. */
  q: text,
  /** Days (UTC), both included. */
  from: day('from'),
  to: day('to'),
};
export const auditListQuery = listQuery(['createdAt'], auditFilters);
/** The same choice as a table, oldest first. */
export const auditTableQuery = z.strictObject(auditFilters);
export type AuditFilters = z.output<typeof auditTableQuery>;

export const mailListQuery = listQuery(['createdAt'], { q: text, state: states(MAIL_STATES) });
export const fileCheckListQuery = listQuery(['checkedAt'], {
  state: z
    .enum(
      ['intact', 'damaged', 'missing', 'not-intact'],
      'state must be intact, damaged, missing or not-intact.',
    )
    .optional(),
});
export const exportListQuery = listQuery(['createdAt'], { state: states(EXPORT_STATES) });
export const selectionListQuery = listQuery(['name', 'createdAt'], { q: text });
export const searchQuery = z.strictObject({
  q: z
    .string('Type what to look for.')
    .trim()
    .min(1, 'Type what to look for.')
    .max(200, 'At most 200 characters.'),
});
export const workerListQuery = listQuery(['startedAt', 'heartbeatAt'], {});
export const uploadListQuery = listQuery(['createdAt'], {});

// Newest first; numbers and names from the start.
function usualSort(field: string): string {
  return field.endsWith('At') ? `-${field}` : field;
}
