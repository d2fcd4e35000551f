import { Jimp } from 'jimp';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { filmOf, stripFrames } from '@/lib/review/film';
import { makeCandidateStrip, stripCaption, type StripPath } from '@/stacks/candidate-strip';
import { makeFilmPicture } from '@/stacks/film-picture';
import { inkDisc, inkLine } from '@/stacks/ink';
import type { StackReader } from '@/stacks/open-stack';
import { inkTrack } from '@/stacks/track-ink';

const SIZE = { frames: 40, width: 64, height: 48 };
/** Each frame holds its own number plus its columns, so that a pixel tells where it came from. */
const reader = {
  ...SIZE,
  readFrame: async (frame: number) => ({
    width: SIZE.width,
    height: SIZE.height,
    counts: Float32Array.from({ length: SIZE.width * SIZE.height }, (_, i) => frame + (i % SIZE.width)),
  }),
} as unknown as StackReader;

const film = filmOf({ meetingFrame: 20, xPx: 30, yPx: 24, paths: [], image: SIZE });
const path = (population: number, y: number): StripPath => {
  const frame = Array.from({ length: 40 }, (_, i) => i);
  return {
    population,
    frame,
    x: frame.map((f) => 20 + f / 2),
    y: frame.map(() => y),
    bridged: frame.map(() => false),
  };
};
const strip = {
  film,
  paths: [path(0, 20), path(1, 28)],
  contrast: { low: 0, high: 255 },
  pixelSizeM: 8e-6,
  frameIntervalS: 0.004,
};

describe('the picture of a film', () => {
  it('holds each frame’s square in its place, pixel for pixel', async () => {
    const png = await makeFilmPicture(reader, film, strip.contrast, 'png');
    const { data, info } = await sharp(png).raw().toBuffer({ resolveWithObject: true });
    expect([info.width, info.height]).toEqual([5 * film.sizePx, 5 * film.sizePx]);
    for (const i of [0, 1, 7, film.frames - 1]) {
      const [x, y] = [(i % 5) * film.sizePx + 3, Math.floor(i / 5) * film.sizePx + 2];
      expect(data[(y * info.width + x) * info.channels]).toBe(film.firstFrame + i + film.leftPx + 3);
    }
  });
});

describe('the strip of a candidate', () => {
  it('is a PNG with a picture for each frame, both tracks in their colours, and a scale bar', async () => {
    const image = await Jimp.read(await makeCandidateStrip(reader, strip));
    const zoom = Math.ceil(116 / film.sizePx);
    const step = film.sizePx * zoom + 4;
    const frames = stripFrames(film);
    expect(image.bitmap.width).toBe(frames.length * step + 4);
    const at = (x: number, y: number) => {
      const colour = image.getPixelColor(Math.round(x), Math.round(y));
      return [colour >>> 24, (colour >>> 16) & 255, (colour >>> 8) & 255];
    };
    for (const [i, frame] of frames.entries()) {
      const x = 4 + i * step + (20 + frame / 2 - film.leftPx + 0.5) * zoom - 0.5;
      // The newest point carries the bead of a trapped track, and the broad end of a free one.
      expect(at(x, 4 + (20 - film.topPx + 0.5) * zoom - 0.5)).toEqual([0xff, 0xbf, 0x3f]);
      const [red, green, blue] = at(x, 4 + (28 - film.topPx + 0.5) * zoom - 0.5);
      expect(green > red && green > blue && green > 120).toBe(true);
      // No stroke runs ahead of its frame.
      expect(at(x + 3 * zoom, 4 + (20 - film.topPx + 0.5) * zoom - 0.5)[2]).not.toBe(0x3f);
    }
    // The longest bar of 1, 2 or 5 that fits into four fifths of a picture: 29 px of 8 um are 232 um.
    const bar = Array.from({ length: step }, (_, x) => at(x, image.bitmap.height - 4 - 12)[0]).filter((red) => red === 255); // prettier-ignore
    expect(bar.length).toBeGreaterThanOrEqual(Math.round((100e-6 / 8e-6) * zoom));
  });

  it.each([
    [20, 'frame 20'],
    [17, '-12 ms'],
    [21, '+4 ms'],
  ])('frame %d is called %s', (frame, words) => expect(stripCaption(frame, 20, 0.004)).toBe(words));
});

describe('ink', () => {
  const blank = () => ({ width: 40, height: 20, data: new Uint8Array(40 * 20 * 4) });
  const inked = ({ data }: { data: Uint8Array }) => data.filter((value, i) => i % 4 === 0).reduce((sum, value) => sum + value, 0) / 255; // prettier-ignore

  it('covers about the area of its shape, at any slope', () => {
    for (const to of [
      [30, 10],
      [24, 17],
      [10, 18],
    ] as const) {
      // prettier-ignore
      const canvas = blank();
      inkLine(canvas, [10, 10], to, { from: 1.5, to: 1.5 }, { colour: [255, 255, 255] });
      const area = 3 * Math.hypot(to[0] - 10, to[1] - 10) + Math.PI * 1.5 ** 2;
      expect(Math.abs(inked(canvas) - area) / area).toBeLessThan(0.06);
    }
    const canvas = blank();
    inkDisc(canvas, [20, 10], 5, { colour: [255, 255, 255] });
    expect(Math.abs(inked(canvas) / (Math.PI * 25) - 1)).toBeLessThan(0.06);
  });

  it('outside the picture changes nothing', () => {
    const canvas = blank();
    inkDisc(canvas, [-20, 50], 5, { colour: [255, 255, 255] });
    expect(inked(canvas)).toBe(0);
  });

  it('tells the populations apart by shape: a bead, a broad end, gaps', () => {
    const points = Array.from({ length: 31 }, (_, i) => ({ x: 5 + i, y: 10, bridged: i % 10 !== 0 }));
    const profile = (population: number) => {
      const canvas = blank();
      inkTrack(canvas, { population, points }, 'stroke');
      // How thick the stroke is at each place along it.
      return Array.from(
        { length: 31 },
        (_, i) =>
          Array.from({ length: 20 }, (_, y) => canvas.data[4 * (y * 40 + 5 + i)]).filter((red) => red > 40)
            .length,
      );
    };
    const [trapped, free, undecided] = [profile(0), profile(1), profile(2)];
    expect([trapped[0], trapped[5], trapped[10]]).toEqual([5, 1, 5]);
    expect(free[28]).toBeGreaterThan(free[2]);
    expect(undecided.some((thick) => thick === 0) && undecided.some((thick) => thick > 0)).toBe(true);
  });
});
