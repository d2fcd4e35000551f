/** Where and when two tracks met. */
export interface Meeting {
  trackA: number;
  trackB: number;
  t0S: number;
  xPx: number;
  yPx: number;
}

/** How near two meetings must lie to be taken for the same event. */
export interface MatchLimits {
  /** Of the same two tracks, s. */
  samePairS: number;
  /** Of other tracks, as after a split or a join, s and px. */
  otherPairS: number;
  otherPairPx: number;
}

/**
 * Which meetings of a new list are the same event as one of an old list. The same two tracks near in
 * time are; so are others at the same place and time, since corrections change what tracks are
 * called. Each is matched once, the nearest first.
 *
 * @returns for each new meeting the place of its old one, or -1.
 */
export function matchMeetings(
  before: readonly Meeting[],
  now: readonly Meeting[],
  limits: MatchLimits,
): Int32Array {
  const pairs: { old: number; fresh: number; cost: number }[] = [];
  // By time, so that only meetings near in time are compared.
  const byTime = before.map((_, i) => i).sort((a, b) => before[a].t0S - before[b].t0S);
  const reachS = Math.max(limits.samePairS, limits.otherPairS);
  now.forEach((meeting, fresh) => {
    let low = 0;
    let high = byTime.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (before[byTime[middle]].t0S < meeting.t0S - reachS) low = middle + 1;
      else high = middle;
    }
    for (let k = low; k < byTime.length && before[byTime[k]].t0S <= meeting.t0S + reachS; k++) {
      const cost = costOf(before[byTime[k]], meeting, limits);
      if (cost !== null) pairs.push({ old: byTime[k], fresh, cost });
    }
  });
  pairs.sort((a, b) => a.cost - b.cost || a.old - b.old || a.fresh - b.fresh);
  const matched = new Int32Array(now.length).fill(-1);
  const taken = new Set<number>();
  for (const { old, fresh } of pairs) {
    if (matched[fresh] >= 0 || taken.has(old)) continue;
    matched[fresh] = old;
    taken.add(old);
  }
  return matched;
}

/** 0..1 for the same pair, 1..3 for another; null where they are not the same event. */
function costOf(old: Meeting, fresh: Meeting, limits: MatchLimits): number | null {
  const apartS = Math.abs(old.t0S - fresh.t0S);
  const same =
    (old.trackA === fresh.trackA && old.trackB === fresh.trackB) ||
    (old.trackA === fresh.trackB && old.trackB === fresh.trackA);
  if (same && apartS <= limits.samePairS) return apartS / limits.samePairS;
  const apartPx = Math.hypot(old.xPx - fresh.xPx, old.yPx - fresh.yPx);
  if (apartS > limits.otherPairS || apartPx > limits.otherPairPx) return null;
  return 1 + apartS / limits.otherPairS + apartPx / limits.otherPairPx;
}
