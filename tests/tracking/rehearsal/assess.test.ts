import { describe, expect, it } from 'vitest';
import { measuredTracks } from '@/tracking/assess/measured-tracks';
import { assessDetection, clusteredShare } from '@/tracking/rehearsal/assess-detection';
import { assessEstimates } from '@/tracking/rehearsal/assess-estimates';
import { assessEvents } from '@/tracking/rehearsal/assess-events';
import { assessPopulations, assessTracks } from '@/tracking/rehearsal/assess-tracks';
import { followTracers } from '@/tracking/rehearsal/follow-tracers';
import { makeTruth } from '@/tracking/rehearsal/make-scene';
import type { RehearsalTruth } from '@/tracking/rehearsal/truth';
import { KIND_TRAPPED } from '@/tracking/simulate/scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import { createSpotSink } from '@/tracking/spots';
import { POPULATIONS, type Tracks } from '@/tracking/types';
import { wilsonInterval } from '@/tracking/populations/wilson';
import { expectWithin } from '../../helpers/expect-within';
import { REHEARSAL_PLAN } from '../../helpers/rehearsal-plan';

const truth = makeTruth(REHEARSAL_PLAN);
const { scene } = truth;
const { tracks, tracer } = trueTracks(scene);
const measured = measuredTracks(tracks);
const followed = followTracers(scene, measured);

/** All points of the truth as spots, moved by so much, without those that `skip` names. */
function spotsOf(
  at: RehearsalTruth,
  movePx: number,
  skip: (point: number) => boolean = () => false,
  extra = 0,
) {
  const order = Array.from(at.scene.frame.keys()).sort((a, b) => at.scene.frame[a] - at.scene.frame[b]);
  const sink = createSpotSink(order.length + extra);
  for (const p of order) {
    if (!skip(p)) sink.push(at.scene.frame[p], at.scene.xPx[p] + movePx, at.scene.yPx[p], 0.1, 0.1, at.scene.brightnessE[p], 8, 0); // prettier-ignore
  }
  for (let i = 0; i < extra; i++) sink.push(0, -50 - i, -50, 0.1, 0.1, 100, 5, 0);
  return sink.spots();
}

describe('detection', () => {
  it('finds all of a perfect one, off by what it was moved', () => {
    const found = assessDetection(truth, spotsOf(truth, 0.03), 0.1);
    expect([found.found.value, found.falseSpots, found.missedCrowded]).toEqual([1, 0, 0]);
    // Moved along x only: per axis the root of half the square.
    expectWithin(found.errorPx!, 0.03 / Math.SQRT2, { rel: 1e-3 });
    expectWithin(found.errorOverStated!, 0.3 / Math.SQRT2, { rel: 1e-3 });
    expectWithin(found.statedPx!, 0.1, { rel: 1e-6 });
    expect(found.boundPx!).toBeGreaterThan(0);
    const bounds = found.classes.map(({ boundPx }) => boundPx!);
    expect(bounds).toEqual([...bounds].sort((a, b) => b - a));
  });

  it('counts what is missed in the class that it belongs to, and what is false', () => {
    const faint = (p: number) => scene.brightnessE[p] < 300;
    const share = scene.brightnessE.filter((light) => light >= 300).length / scene.frame.length;
    const found = assessDetection(truth, spotsOf(truth, 0, faint, 12), 0.1);
    expectWithin(found.found.value, share, { abs: 1e-9 });
    expect(found.falseSpots).toBe(12);
    expect(found.falsePerFrame).toBe(12 / scene.frames);
    expect(found.classes[0].found.value).toBeLessThan(0.2);
    expect(found.classes.at(-1)!.found.value).toBe(1);
    expect(found.classes.reduce((sum, { truePoints }) => sum + truePoints, 0)).toBe(scene.frame.length);
  });

  it('says nothing of false spots among real tracers', () => {
    const found = assessDetection({ ...truth, kind: 'planted' }, spotsOf(truth, 0, undefined, 12), 0.1);
    expect([found.falseSpots, found.falsePerFrame]).toEqual([null, null]);
  });

  it('treats a tracer as one thing in the interval of a share', () => {
    // Two clusters of 10, one found whole and one not: standard error sqrt(2 * 50) / 20 = 0.5.
    expect(clusteredShare([[10, 10], [0, 10]])).toEqual({ value: 0.5, low: 0, high: 1 }); // prettier-ignore
    // Ten clusters of 10 of which each has 9: no scatter, so as sure as ten tracers can make it.
    const even = clusteredShare(Array.from({ length: 10 }, () => [9, 10]));
    expect(even).toEqual({ value: 0.9, ...wilsonInterval(9, 10) });
    const many = clusteredShare(Array.from({ length: 400 }, (_, i) => [i % 2 ? 10 : 8, 10]));
    // Shares 0.8 and 1: standard deviation 0.1 over 400 tracers.
    expectWithin(many.high - many.value, (1.96 * 0.1) / 20, { rel: 0.01 });
  });
});

describe('tracks and populations', () => {
  it('score 1 where they are the true ones', () => {
    const scores = assessTracks(truth, measured, followed);
    for (const score of [scores.alpha, scores.beta, scores.jaccard, scores.jaccardTracks, scores.tracksPerTracer]) expectWithin(score!, 1, { abs: 1e-6 }); // prettier-ignore
    expect(scores.wrongLinkShare).toBe(0);
    expect([...followed.tracerOfTrack]).toEqual([...tracer]);
  });

  it('count a join of two tracers as wrong, once', () => {
    // The second half of track 0 is given the points of another tracer that is there at the same time.
    const frames = (t: number) => tracks.frame.subarray(tracks.start[t], tracks.start[t + 1]);
    const whole = (t: number) => frames(t).length === scene.frames;
    const long = Array.from({ length: tracks.count }, (_, t) => t).filter(whole);
    expect(long.length).toBeGreaterThan(1);
    const [a, b] = long;
    const half = scene.frames / 2;
    const one = (of: Float32Array) => Float32Array.of(...of.subarray(tracks.start[a], tracks.start[a] + half), ...of.subarray(tracks.start[b] + half, tracks.start[b + 1])); // prettier-ignore
    const mixed: Tracks = {
      count: 1,
      start: Uint32Array.of(0, scene.frames),
      frame: Uint32Array.from({ length: scene.frames }, (_, k) => k),
      xPx: one(tracks.xPx),
      yPx: one(tracks.yPx),
      sxPx: one(tracks.sxPx),
      syPx: one(tracks.syPx),
      brightness: one(tracks.brightness),
      flags: new Uint8Array(scene.frames),
    };
    const follows = followTracers(scene, measuredTracks(mixed));
    expect(follows.wrongLinks).toBe(1);
    expect(follows.links).toBeGreaterThan(half);
  });

  it('fill the table by kind and name', () => {
    const right = Uint8Array.from(tracer, (i) => POPULATIONS.indexOf(scene.kind[i] === KIND_TRAPPED ? 'trapped' : 'free')); // prettier-ignore
    const perfect = assessPopulations(truth, right, followed);
    expect(perfect.balancedAccuracy).toBe(1);
    expect(perfect.trapped.trapped + perfect.free.free).toBe(tracks.count);
    const allFree = assessPopulations(truth, right.map(() => POPULATIONS.indexOf('free')), followed); // prettier-ignore
    expect(allFree.balancedAccuracy).toBe(0.5);
    const open = assessPopulations(truth, right.map(() => POPULATIONS.indexOf('undecided')), followed); // prettier-ignore
    expect([open.balancedAccuracy, open.undecidedShare]).toEqual([null, 1]);
  });

  it('leave out what other tracers disturb where particles were planted', () => {
    const { alpha, jaccard, beta, jaccardTracks } = assessTracks({ ...truth, kind: 'planted' }, measured, followed); // prettier-ignore
    expectWithin(alpha, 1, { abs: 1e-6 });
    expect([beta, jaccard, jaccardTracks]).toEqual([null, null, null]);
  });
});

describe('meetings', () => {
  const trackOf = (i: number) => tracer.indexOf(i);
  const candidates = scene.events.map(({ tracerA, tracerB, t0Frames }) => ({
    trackA: trackOf(tracerB),
    trackB: trackOf(tracerA),
    t0S: (t0Frames + 1) * truth.made.frameIntervalS,
    accepted: true,
    failed: [] as string[],
  }));

  it('are found whichever track is named first', () => {
    const events = assessEvents(truth, candidates, measured, followed);
    expect(events.efficiency!.value).toBe(1);
    expect(events.purity!.value).toBe(1);
    expect(events.truth).toEqual(candidates.map(() => true));
  });

  it('are missed at another time, and a candidate that is none is told', () => {
    const late = candidates.map((candidate) => ({ ...candidate, t0S: candidate.t0S + 10 * truth.made.frameIntervalS })); // prettier-ignore
    const events = assessEvents(truth, late, measured, followed);
    expect(events.events.every(({ outcome }) => outcome === 'no candidate')).toBe(true);
    expect(events.truth).toEqual(candidates.map(() => false));
    expect(events.purity!.value).toBe(0);
  });

  it('count once: of two candidates for one meeting the accepted one stands for it', () => {
    const [first] = candidates;
    const failing = { ...first, accepted: false, failed: ['Too few points.'] };
    const twice = assessEvents(truth, [failing, first], measured, followed);
    expect(twice.truth).toEqual([false, true]);
    const only = assessEvents(truth, [failing], measured, followed);
    expect(only.events.find(({ candidate }) => candidate === 0)).toMatchObject({
      outcome: 'not accepted',
      failed: ['Too few points.'],
    });
  });

  it('of planted particles: nobody knows of pairs of real tracers', () => {
    const planted = { ...truth, kind: 'planted' as const };
    const stranger = { ...candidates[0], t0S: 9, trackA: 0, trackB: 1 };
    const lost = { ...followed, tracerOfTrack: followed.tracerOfTrack.slice().fill(-1, 0, 1) };
    expect(assessEvents(planted, [stranger], measured, lost).truth).toEqual([null]);
    expect(assessEvents(planted, [stranger], measured, lost).purity).toBeNull();
    expect(assessEvents(planted, [stranger], measured, followed).truth).toEqual([false]);
  });
});

describe('estimates', () => {
  const base = { quantity: 'line_density', method: 'line-velocity', note: '' } as const;

  it('are set over the truth, and a value that is not there stays away', () => {
    const list = [
      { ...base, value: 3e7, low: 2.5e7, high: 4e7 },
      { ...base, method: 'decay' as const, value: null, low: null, high: null },
      { ...base, quantity: 'line_spacing', value: 1e-4, low: 1e-4, high: 1e-4 },
    ];
    const [off, none, ...rest] = assessEstimates(list, 2e7);
    expect(off).toMatchObject({ ratio: 1.5, ratioLow: 1.25, ratioHigh: 2, coversTruth: false });
    expect(none).toMatchObject({ ratio: null, coversTruth: null });
    expect(rest).toEqual([]);
    expect(assessEstimates(list, 3e7)[0].coversTruth).toBe(true);
    expect(assessEstimates(list, null)[0]).toMatchObject({ ratio: null, coversTruth: null });
  });
});
