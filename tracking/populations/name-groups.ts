import type { ExpectedFlow } from '../flow/expected-flow';
import type { GroupName } from '../flow-measures';
import type { GroupMeans } from './choose-groups';
import type { Kurtosis } from './transverse-kurtosis';

/**
 * Velocities from the mean over the channel to the axis of a laminar square duct all belong to the
 * normal fluid (value from memory): the sheet may lie anywhere.
 */
const AXIS_OVER_MEAN = 2.1;
/** Two values agree within this many standard errors. */
const AGREE_ERRORS = 3;
/** ln r.m.s. that differ by less than this give no cue. */
const LN_CUE_MIN = 0.1;

export interface Naming {
  names: GroupName[];
  note: string;
}

const mm = (metres: number) => `${(1e3 * metres).toPrecision(3)} mm/s`;

/** Distance of a velocity from what the normal fluid may show, m/s. */
function fromNormalFluid(alongMS: number, vnMS: number): number {
  const low = Math.min(vnMS, AXIS_OVER_MEAN * vnMS);
  const high = Math.max(vnMS, AXIS_OVER_MEAN * vnMS);
  return Math.max(low - alongMS, alongMS - high, 0);
}

/**
 * Names two groups by physics: the free one moves like the normal fluid, the trapped one moves
 * more across the flow. Cues that disagree leave both unnamed.
 *
 * @param expected null where the flow can't be known; then the motion across the flow decides.
 */
export function nameTwoGroups(groups: readonly GroupMeans[], expected: ExpectedFlow | null): Naming {
  const [a, b] = groups;
  const byTransverse =
    Math.abs(a.lnTransverse - b.lnTransverse) < LN_CUE_MIN ? null : a.lnTransverse > b.lnTransverse ? 0 : 1;
  let byFlow: 0 | 1 | null = null;
  if (expected && expected.flow.vnMS > 0) {
    const vn = expected.flow.vnMS;
    const da = fromNormalFluid(a.alongMS, vn);
    const db = fromNormalFluid(b.alongMS, vn);
    if (da !== db) byFlow = da > db ? 0 : 1;
  }
  const unnamed = (note: string): Naming => ({ names: ['unnamed', 'unnamed'], note });
  if (byFlow === null && byTransverse === null) {
    return unnamed(
      'Two groups of tracks, but neither their velocity nor their motion across the flow tells which is trapped.',
    );
  }
  if (byFlow !== null && byTransverse !== null && byFlow !== byTransverse) {
    return unnamed(
      'Two groups of tracks, but the one that moves like the normal fluid also moves more across the flow: they stay unnamed until a person decides.',
    );
  }
  const trapped = byFlow ?? byTransverse;
  const names: GroupName[] = trapped === 0 ? ['trapped', 'free'] : ['free', 'trapped'];
  const cue =
    byFlow === null
      ? 'the trapped one moves more across the flow'
      : byTransverse === null
        ? 'the free one moves like the normal fluid'
        : 'the free one moves like the normal fluid, the trapped one more across the flow';
  return { names, note: `Two groups of tracks: ${cue}.` };
}

/** What is known of a recording whose tracks form one group. */
export interface SingleGroup {
  group: GroupMeans;
  tracks: number;
  /** Kurtosis of the velocity across the flow. */
  transverse: Kurtosis;
  /** Mean slope of the mean squared displacement and its standard error. */
  msdSlope: { value: number; error: number };
  /** True where the motion across the flow stands clear of localization noise. */
  aboveNoise: boolean;
}

/**
 * Two groups where no flow is expected: the normal fluid rests and its tracers with it, so a group that itself
 * moves isn't free, however much more the other one moves. Tracers of one line move as one and so look like a
 * group of their own.
 *
 * @param free what the group named free is like.
 * @returns one name for all, none for either, or null where the names stand.
 */
export function namesWithoutFlow(free: SingleGroup, expected: ExpectedFlow | null): Naming | null {
  if (!expected || expected.flow.vnMS > 0 || !free.aboveNoise) return null;
  if (nameSingleGroup(free, expected).names[0] === 'trapped') {
    const note =
      'No flow is expected, and of two groups of tracks the slower one moves in the way of lines as well: all are named trapped.';
    return { names: ['trapped'], note };
  }
  const note =
    'Two groups of tracks, but no flow is expected and even the slower one moves: they stay unnamed until a person decides.';
  return { names: ['unnamed', 'unnamed'], note };
}

/**
 * Names a single group where physics decides: free if it moves with the expected normal fluid and
 * has no heavy tails across it; trapped if it moves otherwise; without any flow trapped if it
 * moves more than noise and in jumps. Else it stays undecided.
 *
 * @param expected the flow, or null where it can't be known.
 */
export function nameSingleGroup(single: SingleGroup, expected: ExpectedFlow | null): Naming {
  const { group, transverse, msdSlope } = single;
  const one = 'One group of tracks, no trapped share';
  if (!expected) {
    return {
      names: ['unnamed'],
      note: `${one}; temperature, heat flux or flow direction are missing, so it stays undecided.`,
    };
  }
  const heavy = transverse.value - AGREE_ERRORS * transverse.error > 0;
  const { vnMS, vnRelativeError } = expected.flow;
  if (vnMS > 0) {
    const error = Math.hypot(group.alongSdMS / Math.sqrt(single.tracks), vnMS * vnRelativeError);
    const off = fromNormalFluid(group.alongMS, vnMS) > AGREE_ERRORS * error;
    const part = `mean velocity ${(group.alongMS / vnMS).toFixed(2)} of the expected normal fluid (${mm(vnMS)})`;
    if (off) return { names: ['trapped'], note: `${one}; ${part}: named trapped.` };
    if (!heavy) return { names: ['free'], note: `${one}; ${part}, no heavy tails across it: named free.` };
    return { names: ['unnamed'], note: `${one}; ${part}, but heavy tails across it: undecided.` };
  }
  const excludes = (slope: number) => Math.abs(msdSlope.value - slope) > AGREE_ERRORS * msdSlope.error;
  if (single.aboveNoise && (heavy || (excludes(1) && excludes(2)))) {
    return {
      names: ['trapped'],
      note: `${one}; no flow is expected, yet they move in the way of lines: named trapped.`,
    };
  }
  return {
    names: ['unnamed'],
    note: `${one}; no flow is expected and nothing tells what they are: undecided.`,
  };
}
