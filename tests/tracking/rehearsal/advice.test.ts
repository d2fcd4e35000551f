import { describe, expect, it } from 'vitest';
import { advise } from '@/tracking/rehearsal/advice/advise';
import { estimateAdvice } from '@/tracking/rehearsal/advice/estimates';
import { exposureAdvice } from '@/tracking/rehearsal/advice/exposure';
import type { AdviceFacts } from '@/tracking/rehearsal/advice/facts';
import { frameRateAdvice, lagAdvice } from '@/tracking/rehearsal/advice/frame-rate';
import { lightAdvice } from '@/tracking/rehearsal/advice/light';
import { lightSheetAdvice } from '@/tracking/rehearsal/advice/light-sheet';
import {
  errorAdvice,
  eventAdvice,
  populationAdvice,
  recipeAdvice,
} from '@/tracking/rehearsal/advice/recovery';
import { crowdingAdvice, loadedLinesAdvice, thinSeedingAdvice } from '@/tracking/rehearsal/advice/seeding';
import type { BrightnessClass, RehearsalAssessment } from '@/tracking/rehearsal/assessment';

const share = (value: number) => ({ value, low: value - 0.02, high: Math.min(1, value + 0.02) });

const brightness = (lowE: number, found: number): BrightnessClass => ({
  lowE,
  highE: 2 * lowE,
  meanE: 1.4 * lowE,
  snr: lowE / 50,
  truePoints: 1000,
  found: share(found),
  isolated: 500,
  errorPx: 0.1,
  boundPx: 0.1,
  statedPx: 0.1,
});

/** A plan in which nothing stands in the way. */
const ASSESSED: Omit<RehearsalAssessment, 'advice'> = {
  kind: 'simulated',
  detection: {
    truePoints: 2000,
    spots: 2000,
    found: share(0.98),
    falseSpots: 8,
    falsePerFrame: 0.1,
    falseAskedPerFrame: 0.1,
    classes: [brightness(300, 0.97), brightness(600, 0.99)],
    isolated: 1000,
    errorPx: 0.1,
    boundPx: 0.1,
    statedPx: 0.1,
    errorOverStated: 1,
    missedCrowded: 10,
  },
  tracks: {
    trueTracks: 100,
    tracks: 100,
    alpha: 0.95,
    rmsePx: 0.2,
    beta: 0.95,
    jaccard: 0.96,
    jaccardTracks: 0.95,
    wrongLinkShare: 0.002,
    tracksPerTracer: 1.02,
  },
  populations: {
    trapped: { trapped: 50, free: 0, undecided: 2 },
    free: { trapped: 0, free: 40, undecided: 2 },
    nothing: { trapped: 0, free: 0, undecided: 0 },
    balancedAccuracy: 1,
    undecidedShare: 0.05,
  },
  events: { events: [], accepted: 0, acceptedTrue: 0, efficiency: null, purity: null, truth: [] },
  trueLineDensityM2: null,
  estimates: [],
};

const FACTS: AdviceFacts = {
  made: {
    pixelSizeM: 8e-6,
    frameIntervalS: 5e-3,
    exposureS: 1e-3,
    sheetThicknessM: 5e-5,
    spacingM: 2e-4,
    beadsPerMetre: 1000,
  },
  assessed: ASSESSED,
  recipe: { longestStepPx: 8, falseSpotsPerFrame: 0.1 },
  spotSizePx: 1.2,
  frames: 100,
  widthPx: 256,
  heightPx: 256,
  meanStepPx: 2,
  longStepPx: 6,
  trappedStepPx: 1,
  neighbourPx: 15,
  tracersInSight: 50,
  trappedTracers: 80,
  blurPx: 0.4,
  medianLifeFrames: 40,
};

const with_ = (part: Partial<AdviceFacts>): AdviceFacts => ({ ...FACTS, ...part });
const assessed = (part: Partial<typeof ASSESSED>): AdviceFacts => with_({ assessed: { ...ASSESSED, ...part } }); // prettier-ignore
const detection = (part: Partial<typeof ASSESSED.detection>) => assessed({ detection: { ...ASSESSED.detection, ...part } }); // prettier-ignore

describe('a plan in which all is well', () => {
  it('is told nothing', () => expect(advise(FACTS)).toEqual([]));
});

describe('frame rate', () => {
  it('is to be raised where tracers go far towards their neighbours', () => {
    // 9 px of 15 px is 0.6 of the way, twice the comfortable 0.3: twice as fast, 400 frames/s.
    const [advice] = frameRateAdvice(with_({ meanStepPx: 9 }));
    expect(advice).toMatchObject({ about: 'frame rate', weight: 'change' });
    expect(advice.sentence).toMatch(/9 px.*0\.6 of the way.*2 times as fast \(400 frames\/s\)/);
    expect(frameRateAdvice(with_({ meanStepPx: 6 }))[0].weight).toBe('know');
  });

  it('is not to blame where steps are short and links wrong all the same', () => {
    const facts = assessed({ tracks: { ...ASSESSED.tracks, wrongLinkShare: 0.05 } });
    expect(frameRateAdvice(facts)[0].sentence).toMatch(/5 % of the links.*although steps are short/);
  });

  it('is not judged from planted particles, whose neighbours are not known', () => {
    expect(frameRateAdvice(with_({ neighbourPx: null, meanStepPx: 40 }))).toEqual([]);
  });

  it('asks for longer lags where noise hides the motion of trapped tracers', () => {
    // Variances: noise 4 sigma^2 = 0.04 px^2 against a step of 0.1 px; 80 % signal at a lag of sqrt(0.16) / 0.1 = 4.
    const [advice] = lagAdvice(with_({ trappedStepPx: 0.1 }));
    expect(advice.sentence).toMatch(/lag of 4 frames or more/);
    expect(lagAdvice(FACTS)).toEqual([]);
  });
});

describe('seeding', () => {
  it('is to be thinned where images touch', () => {
    const facts = { ...detection({ found: share(0.85), missedCrowded: 250 }), tracersInSight: 400 };
    // Poisson: 10 % have a neighbour within 6 px at 0.1054 / (36 pi) = 9.3e-4 px^-2; 400 in 256^2 px are 6.1e-3.
    expect(crowdingAdvice(facts)[0].sentence).toMatch(
      /15 %.*83 % of them within 6 px.*6\.6 times more thinly/,
    );
    expect(crowdingAdvice(detection({ found: share(0.85), missedCrowded: 50 }))).toEqual([]);
  });

  it('is too thin with few trapped tracers, and heavy where they sit closer than lines', () => {
    expect(thinSeedingAdvice(with_({ trappedTracers: 12 }))[0].sentence).toMatch(/Only 12 trapped/);
    expect(thinSeedingAdvice(with_({ trappedTracers: 0 }))).toEqual([]);
    const loaded = with_({ made: { ...FACTS.made, beadsPerMetre: 10_000 } });
    expect(loadedLinesAdvice(loaded)[0].sentence).toMatch(/100 µm apart.*200 µm/);
  });
});

describe('exposure', () => {
  it('is to be shortened where spots are streaks', () => {
    // b = sqrt(1.2) s = 1.31 px is allowed; 2.63 px is twice that: half of 1 ms.
    const [advice] = exposureAdvice(with_({ blurPx: 2 * Math.sqrt(1.2) * 1.2 }));
    expect(advice.sentence).toMatch(/shorten the exposure to 0\.5 ms/);
  });

  it('can be lengthened where light is short, images are sharp, and it is not crowding that hides them', () => {
    const dim = { ...detection({ found: share(0.7), missedCrowded: 10 }), blurPx: 0.2 };
    // Up to the frame interval of 5 ms before 1.31 px are reached.
    expect(exposureAdvice(dim)[0].sentence).toMatch(/exposure of 5 ms gives 5 times the light/);
    const crowded = { ...detection({ found: share(0.7), missedCrowded: 590 }), blurPx: 0.2 };
    expect(exposureAdvice(crowded)).toEqual([]);
    expect(exposureAdvice(with_({ made: { ...FACTS.made, exposureS: null } }))).toEqual([]);
  });
});

describe('light', () => {
  it('is wanting where faint classes are lost, by the factor to the first class that is found', () => {
    const facts = detection({ classes: [brightness(100, 0.4), brightness(200, 0.7), brightness(400, 0.98)] });
    const [advice] = lightAdvice(facts);
    expect(advice.sentence).toMatch(/below 400 electrons.*67 % of all.*only 55 %.*factor of 4 at most/);
    expect(lightAdvice(detection({ classes: [brightness(100, 0.4)] }))[0].sentence).toMatch(/no class/);
  });
});

describe('light sheet', () => {
  it('is compared with the line spacing', () => {
    const sheet = (sheetThicknessM: number) => lightSheetAdvice(with_({ made: { ...FACTS.made, sheetThicknessM } })); // prettier-ignore
    expect(sheet(4e-4)[0]).toMatchObject({ weight: 'change' });
    expect(sheet(4e-4)[0].sentence).toMatch(/400 µm.*200 µm.*below 60 µm/);
    expect(sheet(1e-4)[0]).toMatchObject({ weight: 'know' });
    expect(sheet(5e-5)).toEqual([]);
  });

  it('is too thin where tracers are gone at once', () => {
    expect(lightSheetAdvice(with_({ medianLifeFrames: 6 }))[0].sentence).toMatch(/6 frames \(30 ms\)/);
    // In a recording of 10 frames a life of 6 is long.
    expect(lightSheetAdvice(with_({ medianLifeFrames: 6, frames: 10 }))).toEqual([]);
  });
});

describe('what is recovered', () => {
  it('names steps that the recipe forbids and false spots', () => {
    expect(recipeAdvice(with_({ longStepPx: 9 }))[0].sentence).toMatch(/longer than 9 px.*allows 8 px/);
    expect(recipeAdvice(detection({ falsePerFrame: 2 }))[0].sentence).toMatch(/2 false spots/);
    expect(recipeAdvice(detection({ falsePerFrame: null }))).toEqual([]);
  });

  it('names stated errors that promise too much', () => {
    expect(errorAdvice(detection({ errorOverStated: 1.4 }))[0].sentence).toMatch(/1\.4 times/);
  });

  it('names populations that are mixed up or open', () => {
    const populations = { ...ASSESSED.populations, balancedAccuracy: 0.7, undecidedShare: 0.4 };
    expect(populationAdvice(assessed({ populations })).map(({ weight }) => weight)).toEqual([
      'change',
      'know',
    ]);
  });

  it('names why meetings are missed, and candidates that are none', () => {
    const event = (outcome: 'found' | 'no candidate', points: number) => ({ t0S: 0, xPx: 0, yPx: 0, pointsBefore: points, pointsAfter: 20, outcome, candidate: null, failed: [] }); // prettier-ignore
    const events = (points: number) => ({
      ...ASSESSED.events,
      events: [event('found', 20), event('no candidate', points), event('no candidate', points)],
      efficiency: share(1 / 3),
      accepted: 10,
      purity: share(0.5),
    });
    const [short, none] = eventAdvice(assessed({ events: events(5) }));
    expect(short.sentence).toMatch(/1 of 3.*fewer than 8 frames/);
    expect(none.sentence).toMatch(/50 % of the accepted candidates are none/);
    expect(eventAdvice(assessed({ events: events(20) }))[0].sentence).toMatch(/long enough/);
  });

  it('names methods that miss the line density and those that hold; a lower limit may be low', () => {
    const estimate = (method: string, ratio: number | null) => ({ method, value: ratio && ratio * 1e8, low: 0, high: 0, ratio, ratioLow: ratio && 0.9 * ratio, ratioHigh: ratio && 1.1 * ratio, coversTruth: ratio === null ? null : Math.abs(ratio - 1) < 0.1, note: '' }); // prettier-ignore
    const facts = (list: [string, number | null][]) => assessed({ trueLineDensityM2: 1e8, estimates: list.map(([method, ratio]) => estimate(method, ratio)) }); // prettier-ignore
    const [off, good] = estimateAdvice(facts([['crossings', 2], ['line-velocity', 1], ['visible-length', 0.3], ['heat-flux-prior', 5]])); // prettier-ignore
    expect(off.sentence).toMatch(/by crossings \(2 times the truth\): don't rest on this method/);
    expect(good.sentence).toMatch(/interval of line velocity\./);
    expect(estimateAdvice(facts([['crossings', null]]))[0].sentence).toMatch(/No method can be used/);
  });

  it('puts what stands in the way before what is to be kept in mind', () => {
    const facts = { ...assessed({ populations: { ...ASSESSED.populations, undecidedShare: 0.5 } }), trappedTracers: 5 }; // prettier-ignore
    expect(advise(facts).map(({ weight }) => weight)).toEqual(['change', 'know']);
  });
});
