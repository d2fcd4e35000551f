import { z } from 'zod';

/** Ways to the line density that runs can be compared by. */
export const COMPARED_METHODS = [
  'combined',
  'crossings',
  'neighbour-distance',
  'beads-per-length',
  'line-velocity',
] as const;

/** Campaigns in one comparison at most. */
export const COMPARED_CAMPAIGNS_MOST = 20;

const kelvin = (name: string) =>
  z.coerce
    .number(`${name} must be a temperature in kelvin.`)
    .min(0, `${name} must be 0 to 10 K.`)
    .max(10, `${name} must be 0 to 10 K.`)
    .optional();

/** What is compared: campaigns by their ids with commas between, all where none is named. */
export const compareQuery = z
  .strictObject({
    campaigns: z
      .string()
      .transform((text) => text.split(',').filter(Boolean))
      .pipe(
        z
          .array(z.uuid('campaigns must be ids with commas between.'))
          .max(
            COMPARED_CAMPAIGNS_MOST,
            `At most ${COMPARED_CAMPAIGNS_MOST} campaigns can be compared at once.`,
          ),
      )
      .optional(),
    temperatureFrom_K: kelvin('temperatureFrom_K'),
    temperatureTo_K: kelvin('temperatureTo_K'),
    method: z
      .enum(COMPARED_METHODS, `method must be one of ${COMPARED_METHODS.join(', ')}.`)
      .default('combined'),
  })
  .refine(
    ({ temperatureFrom_K: from, temperatureTo_K: to }) =>
      from === undefined || to === undefined || from <= to,
    {
      error: 'temperatureFrom_K must not be above temperatureTo_K.',
      path: ['temperatureFrom_K'],
    },
  );
export type CompareQuery = z.output<typeof compareQuery>;
