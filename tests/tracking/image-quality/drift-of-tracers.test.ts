import { describe, expect, it } from 'vitest';
import { demoCamera, demoScene } from '@/jobs/demo/make-demo-stack';
import { createDriftMeter } from '@/tracking/image-quality/drift';
import { createRenderer } from '@/tracking/simulate/render';
import { smallConditions, smallScene } from '../../helpers/small-stack';

describe('drift of a picture in which everything flows', () => {
  it.each([5, 6, 7])('is unknown, not the way from one tracer to another (seed %i)', (seed) => {
    const scene = { ...smallScene, widthPx: 256, heightPx: 256, frames: 100, trappedInSight: 70, seed };
    const renderer = createRenderer(demoScene(scene, smallConditions), demoCamera(seed));
    const meter = createDriftMeter(256, 256, scene.frames);
    for (let f = 0; f < scene.frames; f++) meter.add(f, Float32Array.from(renderer.renderFrame(f)));
    const { driftPx, drift } = meter.result();
    expect(driftPx).toBeNull();
    expect(drift.xPx.every((x) => x === null)).toBe(true);
  });
});
