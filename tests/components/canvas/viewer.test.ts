import { describe, expect, it } from 'vitest';
import { commandOf } from '@/components/canvas/viewer-keys';
import { frameRequestWidth, frameUrl } from '@/components/canvas/frame-image';
import { probabilityText } from '@/components/canvas/track-words';
import { ViewerStore } from '@/components/canvas/viewer-store';

const press = (key: string, over = {}) => ({
  key,
  shiftKey: false,
  ctrlKey: false,
  altKey: false,
  metaKey: false,
  ...over,
});

describe('the state of a viewer', () => {
  it('stays inside the recording and knows which way it goes', () => {
    const store = new ViewerStore(10, { low: 0, high: 1 });
    store.step(5);
    expect(store.get()).toMatchObject({ frame: 5, direction: 1 });
    store.step(-99);
    expect(store.get()).toMatchObject({ frame: 0, direction: -1 });
    store.goTo(99);
    expect(store.get().frame).toBe(9);
  });

  it('tells its listeners of changes only', () => {
    const store = new ViewerStore(10, { low: 0, high: 1 });
    let told = 0;
    const stop = store.subscribe(() => (told += 1));
    store.set({ low: 0 });
    store.goTo(0);
    expect(told).toBe(0);
    store.goTo(1);
    expect(told).toBe(1);
    stop();
    store.goTo(2);
    expect(told).toBe(1);
  });
});

describe('keys of a well', () => {
  it('leave shortcuts of the browser and Tab alone', () => {
    for (const key of ['Tab', 'F5', 'a']) expect(commandOf(press(key))).toBeNull();
    expect(commandOf(press('ArrowLeft', { altKey: true }))).toBeNull();
    expect(commandOf(press('0', { ctrlKey: true }))).toBeNull();
  });

  it('step with arrows and move the picture with Shift', () => {
    expect(commandOf(press('ArrowRight'))).toEqual({ kind: 'step', frames: 1 });
    expect(commandOf(press('ArrowRight', { shiftKey: true }))).toEqual({ kind: 'pan', dx: -40, dy: 0 });
    expect(commandOf(press('+', { shiftKey: true }))).toMatchObject({ kind: 'zoom' });
  });
});

describe('pictures of frames', () => {
  const view = (scale: number) => ({ scale, offsetX: 0, offsetY: 0 });
  const image = { width: 2048, height: 2048 };

  it('are asked for no wider than the screen shows, in steps, and whole from there on', () => {
    expect(frameRequestWidth(image, view(0.2), 1)).toBe(512);
    expect(frameRequestWidth(image, view(0.2), 2)).toBe(1024);
    expect(frameRequestWidth(image, view(1), 1)).toBeNull();
    expect(frameRequestWidth({ width: 512, height: 512 }, view(0.8), 1)).toBeNull();
  });

  it('carry contrast and width in their address', () => {
    expect(frameUrl(3, { recordingId: 'r', low: 1.5, high: 900, width: 512 })).toBe(
      '/api/v1/recordings/r/frames/3?low=1.5&high=900&width=512',
    );
  });
});

it('a probability is printed with two digits and never as a certainty that it is not', () => {
  expect(probabilityText(0.974)).toBe('0.97');
  expect(probabilityText(0.9999)).toBe('> 0.99');
  expect(probabilityText(0.0001)).toBe('< 0.01');
  expect(probabilityText(1)).toBe('1.00');
});
