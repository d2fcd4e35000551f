import { z } from 'zod';

const numberOrNull = z.number().nullable();
const list = z.array(z.number());
const populationOrAll = z.enum(['trapped', 'free', 'undecided', 'all']);
const interval = z.object({ value: z.number(), low: z.number(), high: z.number() });
/** Entry i of every list belongs to the same time or place; low and high are a 95 % interval. */
const series = z.object({
  value: z.array(numberOrNull),
  low: z.array(numberOrNull),
  high: z.array(numberOrNull),
});

/** What the analysis page shows besides velocities, pairs and estimates. */
export const detailsViewSchema = z.object({
  accelerations: z.array(
    z.object({
      population: populationOrAll,
      component: z.enum(['x', 'y', 'along', 'across']),
      lagFrames: z.int(),
      lag_s: z.number(),
      rms_m_s2: numberOrNull,
      low_m_s2: numberOrNull,
      high_m_s2: numberOrNull,
      noise_m_s2: numberOrNull,
      excessKurtosis: numberOrNull,
      samples: z.int(),
      tracks: z.int(),
    }),
  ),
  comparisons: z.array(
    z.object({
      what: z.enum(['free along', 'trapped along', 'line density']),
      unit: z.enum(['m/s', 'm^-2']),
      measured: interval.nullable(),
      expected: z.array(interval.extend({ name: z.string() })),
      ratio: interval.nullable(),
      note: z.string(),
    }),
  ),
  overTime: z.object({
    time_s: list,
    trapped_m2: series,
    free_m2: series,
    densities_m2: z.array(
      series.extend({ method: z.enum(['beads-per-length', 'line-velocity']), note: z.string() }),
    ),
    transient: z.object({
      kind: z.enum(['steady', 'growth', 'decay', 'unknown']),
      pConstant: numberOrNull,
      forms: z.array(
        z.object({
          form: z.string(),
          deltaBic: z.number(),
          deltaAicc: z.number(),
          rate_per_s: z.number(),
          rateLnError: z.number(),
        }),
      ),
      laws: z.array(
        z.object({
          law: z.string(),
          halving_s: numberOrNull,
          beginsBefore_s: numberOrNull,
          deltaBic: z.number(),
        }),
      ),
      note: z.string(),
    }),
  }),
  /** Null where the direction of the flow is not given. */
  profiles: z
    .object({
      place_m: list,
      fromWall: z.boolean(),
      width_m: numberOrNull,
      freeAlong_m_s: series,
      trappedAlong_m_s: series,
      spots_m2: series,
      density_m2: series.nullable(),
      note: z.string(),
    })
    .nullable(),
  /** Null where tracers can't be told to share a line. */
  shape: z
    .object({
      chains: z.int(),
      longChains: z.int(),
      length_m: z.number(),
      lengthPerArea_per_m: z.number(),
      spacing_m: numberOrNull,
      order: interval.nullable(),
      curvature: z
        .object({ mean_per_m: z.number(), rms_per_m: z.number(), chains: z.int(), straight: z.int() })
        .nullable(),
      note: z.string(),
    })
    .nullable(),
  /** A random part of the tracks that were judged, for a plot. */
  features: z.object({
    judged: z.int(),
    track: z.array(z.int()),
    /** 0 trapped, 1 free, 2 undecided. */
    population: z.array(z.int()),
    pTrapped: z.array(numberOrNull),
    along_m_s: list,
    transverse_m_s: list,
    acceleration_m_s2: list,
    msdSlope: list,
  }),
  /** Captures and releases within tracks, and the stretches that they cut those tracks into. */
  changes: z.array(
    z.object({ track: z.int(), kind: z.enum(['capture', 'release']), frame: z.int(), lnOdds: z.number() }),
  ),
  segments: z.array(
    z.object({
      track: z.int(),
      fromFrame: z.int(),
      toFrame: z.int(),
      population: z.enum(['trapped', 'free', 'undecided']),
      pTrapped: z.number(),
    }),
  ),
});
export type DetailsView = z.infer<typeof detailsViewSchema>;
