import { expectedFlow, type ExpectedFlow } from '../flow/expected-flow';
import type { GroupName, PopulationSummary } from '../flow-measures';
import { POPULATIONS, type Conditions, type Recipe, type Tracks } from '../types';
import { unitFlow } from '../velocities';
import { changesOfState, type StateChange } from './changes-of-state';
import { FREE, TRAPPED, UNDECIDED } from './codes';
import { asOneGroup, chooseGroups, type ChosenGroups, type GroupMeans } from './choose-groups';
import { featureTable, standardise, type FeatureTable } from './feature-table';
import {
  namesWithoutFlow,
  nameSingleGroup,
  nameTwoGroups,
  type Naming,
  type SingleGroup,
} from './name-groups';
import { FEATURES } from './track-features';
import { transverseKurtosis } from './transverse-kurtosis';
import { wilsonInterval } from './wilson';

/** Fewer tracks than this can't be told apart, nor named. */
const JUDGED_MIN = 10;
/** Lag of the kurtosis, frames: the one of the transverse feature. */
const KURTOSIS_LAG = 2;

export interface TrackPopulations {
  /** Codes of `POPULATIONS`, one per track. */
  population: Uint8Array;
  /** Probability of being trapped, NaN where there is none. */
  pTrapped: Float32Array;
  summary: PopulationSummary;
  /** Captures and releases, by track and frame. */
  changes: StateChange[];
  /** What the tracks were judged by. */
  table: FeatureTable;
}

/**
 * Which tracks are trapped on lines and which move freely. A mixture of one or two groups is
 * fitted to features of the tracks, the groups are named by physics, and a track is named where
 * its probability allows. Tracks below 8 positions stay undecided.
 */
export function findPopulations(
  tracks: Tracks,
  image: { width: number; height: number },
  conditions: Conditions,
  recipe: Pick<Recipe, 'trappedFrom' | 'seed'>,
): TrackPopulations {
  const population = new Uint8Array(tracks.count).fill(UNDECIDED);
  const pTrapped = new Float32Array(tracks.count).fill(Number.NaN);
  const direction = unitFlow(conditions);
  const flow = direction ?? [1, 0];
  const table = featureTable(tracks, image, conditions, flow);
  if (table.n < JUDGED_MIN) {
    const note = `Only ${table.n} tracks are long enough to be judged; all stay undecided.`;
    const none: ChosenGroups = {
      bic: [null, null, null],
      ashmanD: null,
      groups: [],
      single: null,
      probability: new Float64Array(),
      two: null,
    };
    const summary = summarise(population, table, none, { names: [], note });
    return { population, pTrapped, summary, changes: [], table };
  }
  const scaled = standardise(table);
  const found = chooseGroups(table, scaled, recipe.seed);
  const expectation = expectedFlow(conditions);
  const known = 'refused' in expectation ? null : expectation;
  // Without a direction the velocity along the flow means nothing.
  const expected = known && (direction || known.flow.vnMS === 0) ? known : null;
  const like = (group: GroupMeans, rows: readonly number[]) =>
    likeness(tracks, table, group, rows, conditions, flow, expected);
  const { chosen, naming } = nameAll(found, table, expected, like);
  const trapped = naming.names.indexOf('trapped');
  for (let i = 0; i < table.n; i++) {
    const track = table.track[i];
    if (chosen.groups.length === 2 && trapped >= 0) {
      const p = chosen.probability[2 * i + trapped];
      pTrapped[track] = p;
      if (p >= recipe.trappedFrom) population[track] = TRAPPED;
      else if (p <= 1 - recipe.trappedFrom) population[track] = FREE;
    } else if (naming.names[0] === 'trapped') {
      population[track] = TRAPPED;
    } else if (naming.names[0] === 'free') {
      population[track] = FREE;
    }
  }
  const changes =
    chosen.two && trapped >= 0
      ? changesOfState(tracks, image, conditions, flow, {
          scaled,
          trapped: chosen.two[trapped],
          free: chosen.two[1 - trapped],
        })
      : [];
  return { population, pTrapped, summary: summarise(population, table, chosen, naming), changes, table };
}

/** Names for the groups, and these as one group where only that can be named. */
function nameAll(
  found: ChosenGroups,
  table: FeatureTable,
  expected: ExpectedFlow | null,
  like: (group: GroupMeans, rows: readonly number[]) => SingleGroup,
): { chosen: ChosenGroups; naming: Naming } {
  const rows = Array.from({ length: table.n }, (_, i) => i);
  const [group] = found.groups;
  if (!group)
    return { chosen: found, naming: { names: [], note: 'The tracks could not be described by a mixture.' } };
  if (found.groups.length === 1)
    return { chosen: found, naming: nameSingleGroup(like(group, rows), expected) };
  const naming = nameTwoGroups(found.groups, expected);
  const free = naming.names.indexOf('free');
  if (free < 0) return { chosen: found, naming };
  const own = rows.filter((i) => found.probability[2 * i + free] > 0.5);
  const instead = namesWithoutFlow(like(found.groups[free], own), expected) ?? naming;
  return { chosen: instead.names.length === 1 ? asOneGroup(found, table.n) : found, naming: instead };
}

/** What tells whether some rows of the table move in the way of lines. */
function likeness(
  tracks: Tracks,
  table: FeatureTable,
  group: GroupMeans,
  rows: readonly number[],
  conditions: Conditions,
  flow: readonly [number, number],
  expected: ExpectedFlow | null,
): SingleGroup {
  const n = rows.length;
  let mean = 0;
  let square = 0;
  let clear = 0;
  for (const i of rows) {
    const slope = table.value[i * FEATURES + 3];
    mean += slope / n;
    square += (slope * slope) / n;
    // The error of ln r.m.s. from noise alone is small where motion stands clear of noise.
    if (table.variance[i * FEATURES + 1] < 0.25) clear++;
  }
  const own = rows.map((i) => table.track[i]);
  const noFlow = expected !== null && !(expected.flow.vnMS > 0);
  return {
    group,
    tracks: n,
    transverse: transverseKurtosis(tracks, own, conditions, flow, KURTOSIS_LAG, noFlow),
    msdSlope: { value: mean, error: Math.sqrt(Math.max(0, square - mean * mean) / n) },
    aboveNoise: clear > n / 2,
  };
}

function summarise(
  population: Uint8Array,
  table: FeatureTable,
  chosen: ChosenGroups,
  naming: Naming,
): PopulationSummary {
  const counts = { trapped: 0, free: 0, undecided: 0 };
  for (const code of population) counts[POPULATIONS[code]]++;
  const named = counts.trapped + counts.free;
  const isSplit = naming.names.length === 2 && naming.names.includes('trapped') && named > 0;
  return {
    counts,
    judged: table.n,
    groups: chosen.groups.map((group, i) => ({
      name: naming.names[i] ?? ('unnamed' satisfies GroupName),
      weight: group.weight,
      meanAlongMS: group.alongMS,
      transverseRmsMS: Math.exp(group.lnTransverse),
    })),
    bic: chosen.bic,
    ashmanD: chosen.ashmanD,
    trappedFraction: isSplit
      ? { value: counts.trapped / named, ...wilsonInterval(counts.trapped, named), level: 0.95 }
      : null,
    note: naming.note,
  };
}
