import { describe, expect, it } from 'vitest';
import { LocalTracks } from '@/components/editor/log/local-tracks';
import { CorrectionRefusal, makesTrack } from '@/tracking/corrections/correction';
import { createRandom } from '@/tracking/random';
import { contents } from './block-contents';
import { EXTENT, FakeServer } from './fake-server';
import { randomChange, someTracks } from './random-change';

describe('tracks as a person sees them before the server has answered', () => {
  it.each([1, 2, 3])('are what the server will have, in every block (seed %i)', (seed) => {
    const random = createRandom(seed);
    const server = new FakeServer(someTracks(seed));
    const blocks = [server.block(0, 29), server.block(20, 44), server.block(35, 59)];
    const local = new LocalTracks(() => blocks, EXTENT);
    let made = 0;
    for (let n = 0; n < 60; n += 1) {
      const change = randomChange(server, random);
      const number = server.state.nextNumber;
      try {
        server.append('a', `g${n}`, [change], server.log.length);
      } catch {
        // What the server refuses must be refused here as well, and change nothing.
        const before = blocks.map((block) => contents(local.shown(block)));
        expect(() => local.apply(`g${n}`, [change], [number])).toThrow(CorrectionRefusal);
        expect(blocks.map((block) => contents(local.shown(block)))).toEqual(before);
        continue;
      }
      local.apply(`g${n}`, [change], makesTrack(change) ? [number] : [], server.log.length);
      made += 1;
    }
    expect(made).toBeGreaterThan(20);
    for (const block of blocks) {
      expect(contents(local.shown(block))).toEqual(contents(server.block(block.from, block.to)));
    }
    // A block that has it all already is left alone.
    const fresh = server.block(0, 29);
    expect(local.shown(fresh)).toBe(fresh);
  });

  it('come back to what they were when steps are taken back', () => {
    const random = createRandom(11);
    const server = new FakeServer(someTracks(11));
    const block = server.block(0, 59);
    const local = new LocalTracks(() => [block], EXTENT);
    const before = contents(local.shown(block));
    const done: string[] = [];
    for (let n = 0; n < 40; n += 1) {
      try {
        local.apply(`g${n}`, [randomChange(server, random)], [1000 + n]);
        done.push(`g${n}`);
      } catch (refusal) {
        if (!(refusal instanceof CorrectionRefusal)) throw refusal;
      }
    }
    expect(done.length).toBeGreaterThan(10);
    expect(contents(local.shown(block))).not.toEqual(before);
    for (const gesture of done.reverse()) local.takeBack(`undo ${gesture}`, local.stepOf(gesture)!);
    expect(contents(local.shown(block))).toEqual(before);
  });
});
