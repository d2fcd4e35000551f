import type { BrightnessStatistics } from './brightness-statistics';
import type { LinkLimits } from './link-limits';
import type { MotionStatistics } from './motion-statistics';
import { PairFilter } from './pair-filter';
import { readTrack } from './read-track';
import type { SpotTable } from './spot-table';
import { TracerFilter } from './tracer-filter';
import { putBefore, type TrackLinks } from './track-links';

/** Explanations kept from frame to frame. */
const KEPT = 6;
/** Explanations so much (-2 ln likelihood) behind the best one never catch up. */
const HOPELESS = 18;
/** Slots of the explanations of one frame; those of the next one lie in the other bank. */
const BANK = 2 * KEPT;
/** Tracks that are both seen in every frame and stay this many spot sizes apart are not mistaken. */
const CLEAR_SIZES = 2.5;
/**
 * Where each of two tracks goes on as it did, and handing their spots over would be off by so much more
 * (-2 ln likelihood), they are not mistaken however near they are.
 */
const CLEAR_COST = 30;
/** Off by more than this, a track does not go on as it did: something happened that is worth a second look. */
const ODD_COST = 20;
/** Variance of where a tracer is in a spot that it shares with another one, spot sizes squared. */
const MERGED_VARIANCE = 0.4;
const NONE = -1;
/** Bits of what an explanation does in a frame. */
const CROSSED = 1;
const MERGED = 2;
const FRESH_A = 4;
const FRESH_B = 8;

/**
 * Two tracks through their approach, as a beam search over explanations: in each frame spot a is
 * A's and spot b is B's, or the other way round, or a lone spot is both in one; at the end each
 * piece that follows continues one of the two.
 */
export class PairHypotheses {
  private readonly forward: PairFilter;
  private readonly backward: TracerFilter;
  /** Largest variance that a random change of velocity gives the next place, px^2. */
  private readonly bend: number;
  /** Slots now + 2 h and now + 2 h + 1 hold tracers A and B of explanation h. */
  private now = 0;
  private readonly alive = new Uint8Array(2 * BANK + 1);
  private cost = new Float64Array(KEPT);
  private nextCost = new Float64Array(KEPT);
  private readonly candidateCost = new Float64Array(3 * KEPT);
  private readonly candidate = new Int32Array(3 * KEPT);
  private history = new Int32Array(64 * KEPT);
  private spotA = new Int32Array(64);
  private spotB = new Int32Array(64);

  constructor(
    private readonly table: SpotTable,
    private readonly links: TrackLinks,
    private readonly limits: LinkLimits,
    motion: MotionStatistics,
    brightness: BrightnessStatistics,
    private readonly spotSizePx: number,
  ) {
    this.forward = new PairFilter(motion, brightness, table, 1, 2 * BANK + 1);
    this.backward = new TracerFilter(motion, brightness, table, -1, 2);
    this.bend = Math.max(...motion.populations.map(({ jitter }) => jitter));
  }

  /**
   * Decides frames `from .. to` of the tracks that spots `a` and `b` are in; no-op if they are one.
   *
   * @param again skips what nothing was changed at since it was decided before.
   */
  decide(a: number, b: number, from: number, to: number, again: boolean): void {
    const headA = this.headBefore(a, from);
    const headB = this.headBefore(b, from);
    const frames = to - from + 1;
    if (this.spotA.length < frames) {
      this.spotA = new Int32Array(2 * frames);
      this.spotB = new Int32Array(2 * frames);
      this.history = new Int32Array(2 * frames * KEPT);
    }
    const tailA = this.collect(this.firstFrom(a, headA), from, to, this.spotA);
    const tailB = this.collect(this.firstFrom(b, headB), from, to, this.spotB);
    if ((headA >= 0 && headA === headB) || (tailA >= 0 && tailA === tailB)) return;
    const { changed } = this.links;
    let spots = 0;
    let clear = headA >= 0 && headB >= 0 && tailA >= 0 && tailB >= 0;
    let news = isSet(changed, headA) + isSet(changed, headB) + isSet(changed, tailA) + isSet(changed, tailB);
    for (let k = 0; k < frames; k++) {
      const a = this.spotA[k];
      const b = this.spotB[k];
      if (a >= 0 && a === b) return;
      spots += (a >= 0 ? 1 : 0) + (b >= 0 ? 1 : 0);
      clear &&= a >= 0 && b >= 0 && (this.areApart(a, b) || this.goOn(a, b));
      news += isSet(changed, a) + isSet(changed, b);
    }
    if (clear || (again && news === 0)) return;
    if (spots === 0 && (headA < 0 || headB < 0) && (tailA < 0 || tailB < 0)) return;

    this.now = 0;
    this.alive[0] = this.readHead(0, headA, from);
    this.alive[1] = this.readHead(1, headB, from);
    this.cost[0] = 0;
    let kept = 1;
    for (let k = 0; k < frames; k++) kept = this.step(k, kept, from + k);
    if (tailA >= 0) readTrack(this.backward, 0, this.table, this.links.after, tailA);
    if (tailB >= 0) readTrack(this.backward, 1, this.table, this.links.after, tailB);
    let best = 0;
    let bestCost = Infinity;
    let crossed = false;
    for (let h = 0; h < kept; h++) {
      const A = this.now + 2 * h;
      const straight = this.cost[h] + this.tailCost(A, tailA, 0, to) + this.tailCost(A + 1, tailB, 1, to);
      const other = this.cost[h] + this.tailCost(A, tailB, 1, to) + this.tailCost(A + 1, tailA, 0, to);
      if (Math.min(straight, other) >= bestCost) continue;
      best = h;
      bestCost = Math.min(straight, other);
      crossed = other < straight;
    }
    this.relink(headA, headB, tailA, tailB, frames, best, crossed, to);
  }

  /** Last spot of the track of `s` before a frame, or -1. */
  private headBefore(s: number, frame: number): number {
    const { table } = this;
    const { before, after } = this.links;
    let head = s;
    while (head >= 0 && table.frame[head] >= frame) head = before[head];
    if (head < 0) return NONE;
    while (after[head] >= 0 && table.frame[after[head]] < frame) head = after[head];
    return head;
  }

  private firstFrom(s: number, head: number): number {
    if (head >= 0) return this.links.after[head];
    let first = s;
    while (this.links.before[first] >= 0) first = this.links.before[first];
    return first;
  }

  /** Lists a track's spots by frame of the window, -1 where it has none; returns the first one behind. */
  private collect(first: number, from: number, to: number, into: Int32Array): number {
    into.fill(NONE, 0, to - from + 1);
    let s = first;
    for (; s >= 0 && this.table.frame[s] <= to; s = this.links.after[s]) into[this.table.frame[s] - from] = s;
    return s;
  }

  private readHead(slot: number, head: number, from: number): 0 | 1 {
    if (head < 0) return 0;
    readTrack(this.forward, slot, this.table, this.links.before, head);
    for (let f = this.table.frame[head] + 1; f < from; f++) {
      this.forward.predict(slot);
      this.forward.missed[slot]++;
    }
    return this.forward.missed[slot] > this.limits.mayVanishFrames ? 0 : 1;
  }

  /** One frame of all explanations; returns how many are kept. */
  private step(k: number, kept: number, frame: number): number {
    const { forward, alive, candidate, candidateCost } = this;
    const a = this.spotA[k];
    const b = this.spotB[k];
    let count = 0;
    for (let h = 0; h < kept; h++) {
      const A = this.now + 2 * h;
      const B = A + 1;
      const cost = this.cost[h];
      if (alive[A]) forward.predict(A);
      if (alive[B]) forward.predict(B);
      const aToA = this.takeCost(A, a);
      const bToB = this.takeCost(B, b);
      candidateCost[count] = cost + aToA + bToB;
      candidate[count++] = 16 * h + fresh(a, aToA, b, bToB);
      if (a < 0 && b < 0) continue;
      const bToA = this.takeCost(A, b);
      const aToB = this.takeCost(B, a);
      candidateCost[count] = cost + bToA + aToB;
      candidate[count++] = 16 * h + CROSSED + fresh(b, bToA, a, aToB);
      if ((a >= 0 && b >= 0) || !alive[A] || !alive[B]) continue;
      const lone = a >= 0 ? a : b;
      const ownerA = this.ownsMerged(A, B, lone);
      const owner = ownerA ? A : B;
      if (!this.mayTake(owner, lone)) continue;
      candidateCost[count] = cost + forward.mergedCost(owner, ownerA ? B : A, lone, this.spotSizePx);
      candidate[count++] = 16 * h + MERGED + (ownerA === a >= 0 ? 0 : CROSSED);
    }
    let keep = 0;
    for (; keep < KEPT && keep < count; keep++) {
      let least = keep;
      for (let m = keep + 1; m < count; m++) if (candidateCost[m] < candidateCost[least]) least = m;
      const cost = candidateCost[least];
      if (keep > 0 && cost > this.nextCost[0] + HOPELESS) break;
      const chosen = candidate[least];
      // The order of those passed over stays, so that the first of equals is kept.
      for (let m = least; m > keep; m--) {
        candidateCost[m] = candidateCost[m - 1];
        candidate[m] = candidate[m - 1];
      }
      this.apply(chosen, keep, a, b, frame);
      this.nextCost[keep] = cost;
      this.history[k * KEPT + keep] = chosen;
    }
    this.now = BANK - this.now;
    const swap = this.cost;
    this.cost = this.nextCost;
    this.nextCost = swap;
    return keep;
  }

  /** Makes the state that a choice leads to, as the n-th of the next frame. */
  private apply(chosen: number, n: number, a: number, b: number, frame: number): void {
    const { forward, alive } = this;
    const does = chosen & 15;
    const from = this.now + 2 * (chosen >> 4);
    const first = BANK - this.now + 2 * n;
    for (let side = 0; side < 2; side++) {
      if (alive[from + side]) forward.copy(from + side, first + side);
      alive[first + side] = alive[from + side];
    }
    if ((does & MERGED) !== 0) {
      const lone = a >= 0 ? a : b;
      const owner = a >= 0 === ((does & CROSSED) === 0) ? first : first + 1;
      forward.updateMerged(first, first + 1, lone, this.spotSizePx);
      forward.spot[owner] = lone;
      this.endIfLost(first === owner ? first + 1 : first, frame);
      return;
    }
    for (let side = 0; side < 2; side++) {
      const to = first + side;
      const spot = (side === 1) !== ((does & CROSSED) !== 0) ? b : a;
      if (spot < 0) {
        forward.missed[to]++;
        this.endIfLost(to, frame);
      } else if ((does & (side === 0 ? FRESH_A : FRESH_B)) !== 0) {
        forward.start(to, spot);
        alive[to] = 1;
      } else {
        forward.update(to, spot);
      }
    }
  }

  private endIfLost(i: number, frame: number): void {
    const since = frame - this.table.frame[this.forward.spot[i]];
    if (this.alive[i] && since > this.limits.mayVanishFrames) this.alive[i] = 0;
  }

  /** A merged spot goes to the nearer tracer, but not when the other one would be given up soon. */
  private ownsMerged(a: number, b: number, s: number): boolean {
    const { forward, table } = this;
    const soon = Math.max(1, this.limits.mayVanishFrames - 1);
    const lateA = table.frame[s] - table.frame[forward.spot[a]] > soon;
    const lateB = table.frame[s] - table.frame[forward.spot[b]] > soon;
    if (lateA !== lateB) return lateA;
    return forward.offSquared(a, s) <= forward.offSquared(b, s);
  }

  private areApart(a: number, b: number): boolean {
    const dx = this.table.xPx[a] - this.table.xPx[b];
    const dy = this.table.yPx[a] - this.table.yPx[b];
    const apart = CLEAR_SIZES * this.spotSizePx;
    return dx * dx + dy * dy > apart * apart;
  }

  /** True where spots `a` and `b` continue their own tracks in a straight line and surely not each other's. */
  private goOn(a: number, b: number): boolean {
    const { table, links } = this;
    const { xPx, yPx, variance, frame } = table;
    const a1 = links.before[a];
    const b1 = links.before[b];
    if (a1 < 0 || b1 < 0) return false;
    const a2 = links.before[a1];
    const b2 = links.before[b1];
    if (a2 < 0 || b2 < 0 || frame[a] - frame[a2] !== 2 || frame[b] - frame[b2] !== 2) return false;
    const ax = 2 * xPx[a1] - xPx[a2];
    const ay = 2 * yPx[a1] - yPx[a2];
    const bx = 2 * xPx[b1] - xPx[b2];
    const by = 2 * yPx[b1] - yPx[b2];
    const noiseA = variance[a] + 4 * variance[a1] + variance[a2] + this.bend;
    const noiseB = variance[b] + 4 * variance[b1] + variance[b2] + this.bend;
    const own = squared(xPx[a] - ax, yPx[a] - ay) / noiseA + squared(xPx[b] - bx, yPx[b] - by) / noiseB;
    if (own > ODD_COST) return false;
    const other = squared(xPx[b] - ax, yPx[b] - ay) / noiseA + squared(xPx[a] - bx, yPx[a] - by) / noiseB;
    return other - own > CLEAR_COST;
  }

  private mayTake(i: number, s: number): boolean {
    const { table, forward, limits } = this;
    const last = forward.spot[i];
    const gap = table.frame[s] - table.frame[last];
    const dx = table.xPx[s] - table.xPx[last];
    const dy = table.yPx[s] - table.yPx[last];
    const most = limits.longestStepPx * gap;
    return gap <= limits.mayVanishFrames + 1 && dx * dx + dy * dy <= most * most;
  }

  /** Cost of tracer `i` taking spot `s`; at 0 and above a new tracer starts there instead. */
  private takeCost(i: number, s: number): number {
    if (s < 0 || !this.alive[i] || !this.mayTake(i, s)) return 0;
    return Math.min(0, this.forward.cost(i, s));
  }

  /** Cost of the piece behind spot `tail` (in slot `j`) continuing tracer `i`; 0 where it does not. */
  private tailCost(i: number, tail: number, j: number, to: number): number {
    const { forward, table } = this;
    if (tail < 0 || !this.alive[i] || !this.mayTake(i, tail)) return 0;
    const scratch = 2 * BANK;
    forward.copy(i, scratch);
    for (let f = to + 1; f <= table.frame[tail]; f++) {
      forward.predict(scratch);
      if (f < table.frame[tail]) forward.missed[scratch]++;
    }
    return Math.min(0, forward.joinCost(scratch, this.backward, j));
  }

  /** Writes the links of the best explanation. */
  private relink(
    headA: number,
    headB: number,
    tailA: number,
    tailB: number,
    frames: number,
    best: number,
    crossed: boolean,
    to: number,
  ): void {
    const { links, spotA, spotB } = this;
    const endA = this.tailCost(this.now + 2 * best, crossed ? tailB : tailA, crossed ? 1 : 0, to) < 0;
    const endB = this.tailCost(this.now + 2 * best + 1, crossed ? tailA : tailB, crossed ? 0 : 1, to) < 0;
    const path = new Int32Array(frames);
    for (let k = frames - 1, h = best; k >= 0; k--) {
      path[k] = this.history[k * KEPT + h];
      h = path[k] >> 4;
    }
    if (headA >= 0) links.after[headA] = NONE;
    if (headB >= 0) links.after[headB] = NONE;
    for (let k = 0; k < frames; k++) {
      if (spotA[k] >= 0) links.after[spotA[k]] = NONE;
      if (spotB[k] >= 0) links.after[spotB[k]] = NONE;
    }
    let lastA = headA;
    let lastB = headB;
    for (let k = 0; k < frames; k++) {
      const does = path[k] & 15;
      const swap = (does & CROSSED) !== 0;
      const toA = swap ? spotB[k] : spotA[k];
      const toB = swap ? spotA[k] : spotB[k];
      const merged = (does & MERGED) !== 0 ? this.spotSizePx * this.spotSizePx * MERGED_VARIANCE : 0;
      if (toA >= 0) this.table.merged[toA] = merged;
      if (toB >= 0) this.table.merged[toB] = merged;
      if (toA >= 0) putBefore(links, toA, (does & FRESH_A) !== 0 ? NONE : lastA);
      if (toB >= 0) putBefore(links, toB, (does & FRESH_B) !== 0 ? NONE : lastB);
      if (toA >= 0) lastA = toA;
      if (toB >= 0) lastB = toB;
    }
    const followA = crossed ? tailB : tailA;
    const followB = crossed ? tailA : tailB;
    if (followA >= 0) putBefore(links, followA, endA ? lastA : NONE);
    if (followB >= 0) putBefore(links, followB, endB ? lastB : NONE);
  }
}

const squared = (dx: number, dy: number) => dx * dx + dy * dy;

/** Marks of spots at which a tracer starts anew, those that cost nothing to take. */
function fresh(toA: number, costA: number, toB: number, costB: number): number {
  return (toA >= 0 && costA >= 0 ? FRESH_A : 0) + (toB >= 0 && costB >= 0 ? FRESH_B : 0);
}

function isSet(marks: Uint8Array, s: number): number {
  return s >= 0 ? marks[s] : 0;
}
