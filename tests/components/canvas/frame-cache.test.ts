import { describe, expect, it } from 'vitest';
import { FrameCache } from '@/components/canvas/frame-cache';
import { prefetchOrder } from '@/components/canvas/prefetch-order';

/** Loads that the test settles by hand. */
function fakeLoads() {
  const open = new Map<number, { done: () => void; fail: () => void }>();
  const closed: number[] = [];
  const started: number[] = [];
  const load = (frame: number, signal: AbortSignal) =>
    new Promise<{ frame: number; close: () => void }>((resolve, reject) => {
      started.push(frame);
      const settle = (run: () => void) => () => {
        open.delete(frame);
        run();
      };
      open.set(frame, {
        done: settle(() => resolve({ frame, close: () => closed.push(frame) })),
        fail: settle(() => reject(new Error('The link was lost.'))),
      });
      signal.addEventListener('abort', settle(() => reject(new DOMException('gone', 'AbortError')))); // prettier-ignore
    });
  const settleAll = async () => {
    while (open.size > 0) {
      for (const flight of [...open.values()]) flight.done();
      await new Promise((resolve) => setImmediate(resolve));
    }
  };
  return { open, closed, started, load, settleAll };
}

describe('the order of loading ahead', () => {
  it('begins with the frame shown and goes three ahead for each one behind', () => {
    expect(prefetchOrder(10, 1, 100, 9)).toEqual([10, 11, 12, 13, 9, 14, 15, 16, 8]);
    expect(prefetchOrder(10, -1, 100, 5)).toEqual([10, 9, 8, 7, 11]);
  });

  it('names each frame of a short recording once, from its ends too', () => {
    for (const frame of [0, 3, 6]) {
      const order = prefetchOrder(frame, 1, 7, 60);
      expect([...order].sort((a, b) => a - b)).toEqual([0, 1, 2, 3, 4, 5, 6]);
    }
  });
});

describe('the cache of frames', () => {
  it('loads the frame shown first and never more at once than allowed', async () => {
    const loads = fakeLoads();
    const cache = new FrameCache({ frames: 100, load: loads.load, onChange: () => undefined, parallel: 3 });
    cache.want(50, 1);
    expect(loads.started).toEqual([50, 51, 52]);
    expect(loads.open.size).toBe(3);
    loads.open.get(50)!.done();
    await new Promise((resolve) => setImmediate(resolve));
    expect(cache.get(50)).toMatchObject({ frame: 50 });
    expect(loads.open.size).toBe(3);
  });

  it('keeps no more than its capacity, frees what it drops, and never the frame shown', async () => {
    const loads = fakeLoads();
    const cache = new FrameCache({ frames: 100, load: loads.load, onChange: () => undefined, capacity: 10 });
    for (const frame of [5, 40, 80]) {
      cache.want(frame, 1);
      await loads.settleAll();
      expect(cache.get(frame)).not.toBeNull();
    }
    const kept = Array.from({ length: 100 }, (_, frame) => cache.get(frame)).filter(Boolean);
    expect(kept.length).toBeLessThanOrEqual(10);
    expect(loads.closed.length).toBe(new Set(loads.started).size - kept.length);
  });

  it('gives up requests that are no longer wanted', () => {
    const loads = fakeLoads();
    const cache = new FrameCache({ frames: 1000, load: loads.load, onChange: () => undefined, parallel: 4 });
    cache.want(10, 1);
    cache.want(900, 1);
    expect([...loads.open.keys()]).not.toContain(10);
  });

  it('says why a frame could not be had, and asks again only when told to', async () => {
    const loads = fakeLoads();
    const cache = new FrameCache({ frames: 1, load: loads.load, onChange: () => undefined });
    cache.want(0, 1);
    loads.open.get(0)!.fail();
    await new Promise((resolve) => setImmediate(resolve));
    expect(cache.failure(0)?.message).toBe('The link was lost.');
    cache.want(0, 1);
    expect(loads.open.size).toBe(0);
    cache.retry(0);
    await loads.settleAll();
    expect(cache.get(0)).not.toBeNull();
    expect(cache.failure(0)).toBeNull();
  });

  it('frees all pictures when it is closed, those still coming in as well', async () => {
    const loads = fakeLoads();
    const cache = new FrameCache({ frames: 3, load: loads.load, onChange: () => undefined, parallel: 1 });
    cache.want(0, 1);
    loads.open.get(0)!.done();
    await new Promise((resolve) => setImmediate(resolve));
    cache.close();
    await new Promise((resolve) => setImmediate(resolve));
    expect(loads.closed).toContain(0);
    expect(loads.open.size).toBe(0);
  });

  it('shows what was overtaken until the new one is there, and takes nothing for new that was asked for before', async () => {
    const { load, open, closed, started, settleAll } = fakeLoads();
    const cache = new FrameCache({ frames: 3, load, onChange: () => undefined, capacity: 5 });
    cache.want(0, 1);
    await settleAll();
    const old = cache.get(0)!;
    started.length = 0;
    cache.renew();
    expect(cache.get(0)).toBe(old);
    expect(started).toEqual([0, 1, 2]);
    open.get(0)!.done();
    await settleAll();
    expect(cache.get(0)).not.toBe(old);
    expect(closed).toEqual([0, 1, 2]);
    expect(cache.values()).toHaveLength(3);
  });
});
