import { describe, expect, it } from 'vitest';
import { framesTogether } from '@/components/uploads/dropped-files';
import { sentenceIn } from '@/components/uploads/send-file';
import { newItem } from '@/components/uploads/upload-item';
import { uploadWords } from '@/components/uploads/upload-row';
import { uploadMemory } from '@/lib/uploads/upload-memory';

describe('how far an upload is, in words', () => {
  const item = newItem('k', 'sheet-a.tif', 'file', 24_600_000_000);

  it('names amount, speed and time left while it is sent', () => {
    const words = uploadWords({
      ...item,
      state: 'sending',
      sentBytes: 7_700_000_000,
      bytesPerS: 42_000_000,
      secondsLeft: 402,
    });
    expect(words).toBe('7.7 of 24.6 GB, 42.0 MB/s, about 7 min left');
  });

  it('claims no speed while it is paused, and no end before all is there', () => {
    expect(uploadWords({ ...item, state: 'paused', sentBytes: 24_599_000_000, bytesPerS: 1 })).toBe(
      '24.5 of 24.6 GB, paused',
    );
  });

  it('counts the files of a folder', () => {
    const words = uploadWords({ ...item, kind: 'folder', files: 1200, filesDone: 7, state: 'sending' });
    expect(words).toContain('7 of 1\u2009200 files');
  });
});

describe('files that come together', () => {
  const file = (name: string) => new File(['x'], name);

  it('are the frames of one recording when they are PNG', () => {
    const files = [file('f1.png'), file('stack.tif'), file('f2.PNG')];
    const { files: single, folders } = framesTogether({ files, folders: [] });
    expect(single.map(({ name }) => name)).toEqual(['stack.tif']);
    expect(folders.map((entries) => entries.map(({ path }) => path))).toEqual([['f1.png', 'f2.PNG']]);
  });

  it('stay single when there is only one frame', () => {
    expect(framesTogether({ files: [file('f1.png')], folders: [] }).folders).toEqual([]);
  });
});

describe('the reason in a refusal', () => {
  it('is the detail of a problem document, or the plain text, or said to be missing', () => {
    expect(sentenceIn('{"detail":"The file is empty (0 bytes)."}')).toBe('The file is empty (0 bytes).');
    expect(sentenceIn('Upload-Offset conflict\n')).toBe('Upload-Offset conflict');
    expect(sentenceIn('')).toBe('The server refused it without a reason.');
  });
});

describe('what the browser remembers of an upload', () => {
  it('is gone after it was forgotten', () => {
    const kept = new Map<string, string>();
    const memory = uploadMemory(() => ({
      getItem: (key) => kept.get(key) ?? null,
      setItem: (key, value) => void kept.set(key, value),
      removeItem: (key) => void kept.delete(key),
    }));
    memory.set('file r', 'ends');
    expect(memory.get('file r')).toBe('ends');
    memory.forget('file r');
    expect(memory.get('file r')).toBeNull();
  });

  it('is nothing, and no obstacle, where the browser keeps nothing', () => {
    const memory = uploadMemory(() => {
      throw new Error('denied');
    });
    memory.set('file r', 'ends');
    expect(memory.get('file r')).toBeNull();
  });
});
