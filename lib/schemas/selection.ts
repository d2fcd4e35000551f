import { z } from 'zod';
import { nameSchema } from './text';

/** Campaigns in one selection at most. */
export const SELECTED_CAMPAIGNS_MOST = 20;
export const DRIVES = ['counterflow', 'coflow', 'towed-grid', 'oscillating-grid', 'none'] as const;

const bound = (name: string, unit: string, most: number, least = 0) => {
  const error = `${name} must be a number from ${least} to ${most} ${unit}.`;
  return z.coerce.number(error).min(least, error).max(most, error).optional();
};

/** A list in an address: `a,b`. */
const listed = <T extends z.ZodType<string, string>>(one: T, most: number, error: string) =>
  z
    .string()
    .max(4_000)
    .transform((text) =>
      text
        .split(',')
        .map((part) => part.trim())
        .filter(Boolean),
    ) // prettier-ignore
    .pipe(z.array(one).max(most, error))
    .optional();

/** What runs and their analyses are chosen by; everything where nothing is named. */
export const selectionFields = {
  campaigns: listed(
    z.uuid('campaigns must be ids with commas between.'),
    SELECTED_CAMPAIGNS_MOST,
    `At most ${SELECTED_CAMPAIGNS_MOST} campaigns can be compared at once.`,
  ),
  temperatureFrom_K: bound('temperatureFrom_K', 'K', 10),
  temperatureTo_K: bound('temperatureTo_K', 'K', 10),
  heatFluxFrom_W_m2: bound('heatFluxFrom_W_m2', 'W/m^2', 1e6),
  heatFluxTo_W_m2: bound('heatFluxTo_W_m2', 'W/m^2', 1e6),
  /** Of |v_ns|. */
  vnsFrom_m_s: bound('vnsFrom_m_s', 'm/s', 10),
  vnsTo_m_s: bound('vnsTo_m_s', 'm/s', 10),
  drives: listed(
    z.enum(DRIVES, `drives must be of ${DRIVES.join(', ')}, with commas between.`),
    DRIVES.length,
    'Name each drive once.',
  ),
  /** Of the run or of its campaign; one of them is enough. */
  tags: listed(z.string().max(60, 'A tag has at most 60 characters.'), 30, 'At most 30 tags.'),
  signedOff: z.enum(['yes', 'no'], 'signedOff must be yes or no.').optional(),
};

const RANGES = [
  ['temperatureFrom_K', 'temperatureTo_K'],
  ['heatFluxFrom_W_m2', 'heatFluxTo_W_m2'],
  ['vnsFrom_m_s', 'vnsTo_m_s'],
] as const;

/** Refuses ranges that are the wrong way round. */
export function checkRanges(value: Record<string, unknown>, context: z.RefinementCtx): void {
  for (const [from, to] of RANGES) {
    const [low, high] = [value[from], value[to]];
    if (typeof low === 'number' && typeof high === 'number' && low > high) {
      context.addIssue({ code: 'custom', message: `${from} must not be above ${to}.`, path: [from] });
    }
  }
}

export const selectionQuery = z.strictObject(selectionFields).superRefine(checkRanges);
export type Selection = z.output<typeof selectionQuery>;

/** Parameters of an address that choose runs; others say how they are shown. */
export const SELECTION_NAMES = Object.keys(selectionFields) as (keyof typeof selectionFields)[];

/** Filters as they stand in an address, checked but kept as typed. */
export const filtersSchema = z
  .partialRecord(
    z.enum(SELECTION_NAMES as [string, ...string[]], 'This is nothing to choose runs by.'),
    z.string().trim().max(4_000),
  ) // prettier-ignore
  .superRefine((filters, context) => {
    const { error } = selectionQuery.safeParse(filters);
    for (const { message, path } of error?.issues ?? []) {
      context.addIssue({ code: 'custom', message, path: [...path] });
    }
  });

export const selectionCreateSchema = z.strictObject({ name: nameSchema, filters: filtersSchema });
export const selectionPatchSchema = selectionCreateSchema.partial();
export type SelectionCreate = z.output<typeof selectionCreateSchema>;

/** Why a run is left out of fits. */
export const exclusionSchema = z.strictObject({
  reason: z
    .string('Say why the run is left out.')
    .trim()
    .min(3, 'Say why the run is left out.')
    .max(500, 'At most 500 characters.'),
});
