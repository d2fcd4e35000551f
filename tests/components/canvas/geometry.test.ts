import { describe, expect, it } from 'vitest';
import {
  centreOn,
  fitView,
  panBy,
  SCALE_MAX,
  toImage,
  toScreen,
  zoomAt,
  type ViewBox,
} from '@/components/canvas/view-box';
import { expectWithin } from '@/tests/helpers/expect-within';
import { createRandom } from '@/tracking/random';

const image = { width: 640, height: 512 };
const well = { width: 856, height: 404 };

const corners = (view: ViewBox) => [
  toScreen(view, { x: -0.5, y: -0.5 }),
  toScreen(view, { x: image.width - 0.5, y: image.height - 0.5 }),
];

describe('how an image lies in a well', () => {
  it('shows the whole image in the middle when it fits', () => {
    const [topLeft, bottomRight] = corners(fitView(image, well));
    expectWithin(topLeft.y, 0, { abs: 1e-9 });
    expectWithin(bottomRight.y, well.height, { abs: 1e-9 });
    expectWithin(topLeft.x, well.width - bottomRight.x, { abs: 1e-9 });
  });

  it('keeps the place under the pointer while zooming, wherever the pointer is', () => {
    const { uniform } = createRandom(3);
    let view = fitView(image, well);
    for (let k = 0; k < 200; k += 1) {
      const at = toScreen(view, { x: uniform() * image.width, y: uniform() * image.height });
      if (at.x < 0 || at.y < 0 || at.x > well.width || at.y > well.height) continue;
      const before = toImage(view, at);
      // Zooming in never meets the rule that keeps the image inside the well.
      view = zoomAt(view, 1 + uniform() * 0.05, at, image, well);
      const after = toImage(view, at);
      expectWithin(after.x, before.x, { abs: 1e-6 });
      expectWithin(after.y, before.y, { abs: 1e-6 });
    }
  });

  it('never enlarges a camera pixel beyond the limit', () => {
    let view = fitView(image, well);
    for (let k = 0; k < 100; k += 1) view = zoomAt(view, 2, { x: 400, y: 200 }, image, well);
    expect(view.scale).toBe(SCALE_MAX);
  });

  it('keeps a part of the image in the well however far it is dragged', () => {
    const { uniform } = createRandom(4);
    for (let k = 0; k < 100; k += 1) {
      let view = zoomAt(fitView(image, well), 0.3 + uniform() * 20, { x: 300, y: 100 }, image, well);
      view = panBy(view, (uniform() - 0.5) * 1e5, (uniform() - 0.5) * 1e5, image, well);
      const [topLeft, bottomRight] = corners(view);
      expect(topLeft.x).toBeLessThan(well.width);
      expect(topLeft.y).toBeLessThan(well.height);
      expect(bottomRight.x).toBeGreaterThan(0);
      expect(bottomRight.y).toBeGreaterThan(0);
    }
  });

  it('brings a place into the middle', () => {
    const view = centreOn(
      zoomAt(fitView(image, well), 8, { x: 0, y: 0 }, image, well),
      { x: 300, y: 200 },
      image,
      well,
    );
    const at = toScreen(view, { x: 300, y: 200 });
    expectWithin(at.x, well.width / 2, { abs: 1e-9 });
    expectWithin(at.y, well.height / 2, { abs: 1e-9 });
  });
});
