import { describe, expect, test } from 'vitest';
import type { MarkedFrame } from '@/tracking/corrections/marked-frames';
import { chainsInSheet, chordsOfBox, perLengthOf } from '@/tracking/estimates/chains-in-sheet';
import { markedChainsEstimate } from '@/tracking/estimates/marked-chains';
import { marksAndTracers } from '@/tracking/estimates/marks-and-tracers';
import { createRandom } from '@/tracking/random';
import { isotropicLines, type Box } from '@/tracking/simulate/isotropic-lines';
import { marksOfScene } from '@/tracking/simulate/marks-of-scene';
import { KIND_TRAPPED } from '@/tracking/simulate/scene';
import { tangleScene } from '@/tracking/simulate/tangle-scene';
import { trueTracks } from '@/tracking/simulate/true-tracks';
import type { Conditions } from '@/tracking/types';
import { expectWithin } from '@/tests/helpers/expect-within';

const PX = 1e-5;
const SIZE = 512;
const H = 2e-4;
const LINE_DENSITY_M2 = 3e7;
const conditions: Conditions = { pixelSize_m: PX, frameInterval_s: 0.005, sheetThickness_m: H };

/** A tangle with all its lines marked in some frames. */
function marked(seed: number, beadsPerMetre: number, frames = [20, 60, 100]) {
  const scene = tangleScene({
    widthPx: SIZE,
    heightPx: SIZE,
    frames: 120,
    pixelSizeM: PX,
    frameIntervalS: 0.005,
    sheetThicknessM: H,
    lineDensityM2: LINE_DENSITY_M2,
    beadsPerMetre,
    freeTracersPerFrame: 0,
    vnMPerS: 0,
    tangleVelocityMPerS: -1e-3,
    seed,
  });
  const { tracks, tracer } = trueTracks(scene, { sigmaPx: 0.15, seed, shortestTrackFrames: 3 });
  const trapped = Uint8Array.from(tracer, (i) => (scene.kind[i] === KIND_TRAPPED ? 1 : 0));
  const image = { width: SIZE, height: SIZE };
  return { scene, marks: marksOfScene(scene, frames), recording: { tracks, trapped, image, spotSizePx: 1 } };
}
const estimate = (marks: readonly MarkedFrame[], { recording }: ReturnType<typeof marked>, over = {}) =>
  markedChainsEstimate(marks, { ...recording, conditions: { ...conditions, ...over } });

describe('chains of tracers in a sheet', () => {
  test.each([
    [120, 0.2],
    // So small that the edges cut most of the lines that lie in the sheet.
    [1, 400],
  ])(
    'share between the outermost tracers agrees with counting on lines simulated in a sheet %f wide',
    (width, density) => {
      const random = createRandom(5);
      const rate = 4;
      const h = 0.3;
      const shortest = 0.05;
      const box: Box = { low: [0, 0, 0], high: [width, width, h] };
      let [between, whole, tracers] = [0, 0, 0];
      for (let round = 0; round < 40; round++) {
        for (const line of isotropicLines(random, box, density)) {
          const across = Math.hypot(line.direction[0], line.direction[1]);
          const length = line.to - line.from;
          whole += length * across;
          const places = Array.from(
            { length: random.poisson(rate * length) },
            () => random.uniform() * length,
          );
          if (places.length < 2) continue;
          const shown = (Math.max(...places) - Math.min(...places)) * across;
          if (shown < shortest) continue;
          tracers += places.length;
          between += shown;
        }
      }
      const expected = chainsInSheet(chordsOfBox(width, width, h), rate, shortest);
      expectWithin(between / whole, expected.shareBetween, { rel: 0.03 });
      expectWithin(tracers / between, expected.tracersPerLengthM, { rel: 0.03 });
    },
  );

  test('pieces are those of a wide sheet: h / cos long, pi / 4 in projection', () => {
    const { lengthM, across } = chordsOfBox(1e4, 1e4, 1);
    // Weighed by their length, cosines are uniform; the median one is 1 / 2 and its piece 2 h long.
    expectWithin([...lengthM].sort((a, b) => a - b)[lengthM.length >> 1], 2, { rel: 0.01 });
    expectWithin(across.reduce((a, b) => a + b, 0) / across.length, Math.PI / 4, { rel: 1e-3 });
  });

  test('many tracers show all of the lines', () => {
    const { shareBetween, tracersPerLengthM } = chainsInSheet(chordsOfBox(1e3, 1e3, 1), 500, 0);
    expect(shareBetween).toBeGreaterThan(0.99);
    expectWithin(tracersPerLengthM, (500 * 4) / Math.PI, { rel: 0.01 });
  });

  test('tracers per length follow from those per length of chain', () => {
    const chords = chordsOfBox(20, 10, 1);
    for (const rate of [0.01, 0.3, 1, 4, 60]) {
      const { tracersPerLengthM } = chainsInSheet(chords, rate, 0.1);
      expectWithin(perLengthOf(chords, tracersPerLengthM, 0.1), rate, { rel: 1e-5 });
    }
  });
});

describe('marked lines', () => {
  test('the same line in several frames is one line', () => {
    const one = marked(3, 5000);
    const { lengthPx, tracers } = marksAndTracers(one.marks, one.recording);
    const trueLines = new Set<number>();
    for (const { frame } of one.marks) {
      const counts = new Map<number, number>();
      for (let i = 0; i < one.scene.tracers; i++) {
        for (let k = one.scene.start[i]; k < one.scene.start[i + 1]; k++) {
          if (one.scene.frame[k] !== frame) continue;
          counts.set(one.scene.line[i], (counts.get(one.scene.line[i]) ?? 0) + 1);
        }
      }
      for (const [line, count] of counts) if (count > 1) trueLines.add(line);
    }
    const marksOfAll = one.marks.reduce((sum, { lines }) => sum + lines.length, 0);
    expect(marksOfAll).toBeGreaterThan(1.5 * trueLines.size);
    expectWithin(lengthPx.length, trueLines.size, { rel: 0.15 });
    // Tracers nearer to each other than two pixels are not marked, and few others come near by chance.
    const onLines = one.marks.reduce((sum, { lines }) => sum + lines.flat().length, 0);
    expectWithin(
      tracers.reduce((a, b) => a + b, 0),
      onLines,
      { rel: 0.1 },
    );
  });

  // Scatter of ln L over such tangles is .2 (40 seeds); a standard normal stays within 3.3 of it 999 times in 1,000.
  test.each([
    [1, 5000],
    [2, 10_000],
  ])('give the line density of the tangle (seed %i, %i tracers per metre)', (seed, beadsPerMetre) => {
    const one = marked(seed, beadsPerMetre);
    const { valueM2, statistical, note } = estimate(one.marks, one);
    expect(valueM2, note).not.toBeNull();
    expect(Math.abs(Math.log(valueM2! / LINE_DENSITY_M2))).toBeLessThan(3.3 * 0.2);
    expect(statistical).toBeGreaterThan(0.1);
    expect(statistical).toBeLessThan(0.4);
  });

  test('that were marked once more a frame later add next to nothing to what is known', () => {
    const one = marked(4, 10_000, [60, 61, 62]);
    const [once, thrice] = [estimate(one.marks.slice(0, 1), one), estimate(one.marks, one)];
    expectWithin(thrice.statistical, once.statistical, { rel: 0.2 });
  });

  test('count only in frames that are complete', () => {
    const one = marked(1, 10_000);
    const [first, ...others] = one.marks;
    const some = [first, ...others.map((frame) => ({ ...frame, complete: false }))];
    expect(estimate(some, one).valueM2).toBe(estimate([first], one).valueM2);
    const none = one.marks.map((frame) => ({ ...frame, complete: false }));
    expect(estimate(none, one)).toMatchObject({ valueM2: null, note: expect.stringMatching(/of no frame/) });
    // A complete frame without lines halves what one with lines has.
    const empty: MarkedFrame = { frame: 118, lines: [], complete: true };
    const halved = estimate([first, empty], one).inputs.markedLengthPerArea.value as number;
    expectWithin(halved, (estimate([first], one).inputs.markedLengthPerArea.value as number) / 2, {
      rel: 1e-12,
    });
  });

  test('are declined with the reason where they tell too little', () => {
    const one = marked(1, 10_000);
    const [first] = one.marks;
    const says = (marks: readonly MarkedFrame[], over = {}) => {
      const result = estimate(marks, one, over);
      expect(result.valueM2).toBeNull();
      return result.note;
    };
    expect(says([])).toMatch(/Nobody has marked lines/);
    expect(says([{ ...first, lines: first.lines.slice(0, 3) }])).toMatch(/Only 3 lines are marked/);
    expect(says([first], { sheetThickness_m: undefined })).toMatch(/thickness of the light sheet/);
    const astray = {
      ...first,
      lines: first.lines.map((line) => line.map(([x]): [number, number] => [x, -0.4])),
    };
    expect(says([astray])).toMatch(/No trapped tracer lies on the marked lines/);
    const sparse = marked(1, 1200);
    const { valueM2, note, atLeastM2 } = estimate(sparse.marks, sparse);
    expect([valueM2, note]).toEqual([null, expect.stringMatching(/too little to go by/)]);
    expect(atLeastM2).toBeGreaterThan(0);
  });
});
