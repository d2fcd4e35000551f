import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { compareNaturally } from '@/lib/natural-order';
import { frameGaps } from '@/stacks/frame-files';
import { inspectBytes, readBytes, refuseBytes } from '../helpers/stack-writers/stack-folder';
import { testPages } from '../helpers/stack-writers/test-pattern';
import { writePng } from '../helpers/stack-writers/write-png';
import { writeTiff } from '../helpers/stack-writers/write-tiff';
import { writeZip, type ZipFileOptions } from '../helpers/stack-writers/write-zip';

const SIZE = { width: 15, height: 11 };
const PIXELS = 15 * 11;
const pages = testPages(12, PIXELS, { from: 0, to: 65535 });
const png = (k: number) => writePng(pages[k]!, { ...SIZE, bits: 16, filters: [0, 1, 2, 3, 4] });
const tiff = (k: number, compression = 1) =>
  writeTiff([{ samples: pages[k]! }], { ...SIZE, compression }).bytes;
/** In the order a file system might list them: 1, 10, 11, 12, 2, ... */
const shuffled = Array.from({ length: 12 }, (_, k) => k).sort((a, b) =>
  String(a + 1) < String(b + 1) ? -1 : 1,
);
const zip = (files: ZipFileOptions[]) => ({ name: 'run.zip', bytes: writeZip(files) });
const folderOf = (make: (k: number) => Buffer, ending: string) =>
  shuffled.map((k) => ({ name: `shot_${k + 1}.${ending}`, bytes: make(k) }));

describe('frames in a folder or an archive', () => {
  it.each(['png', 'tif'])('are read in natural order from a folder of %s files', async (ending) => {
    const { frames, report } = await readBytes(folderOf(ending === 'png' ? png : tiff, ending));
    expect(frames).toEqual(pages);
    expect(report.warnings).toEqual([]);
  });

  it.each([0, 8])('are read in natural order from an archive, method %i', async (method) => {
    const files = shuffled.map((k) => ({ name: `run/shot_${k + 1}.png`, data: png(k), method }));
    const extras = [
      { name: 'run/', data: Buffer.alloc(0), method: 0 },
      { name: 'run/notes.txt', data: Buffer.from('x') },
      { name: '__MACOSX/run/._shot_1.png', data: Buffer.from('x') },
    ];
    expect((await readBytes(zip([...extras, ...files]))).frames).toEqual(pages);
  });

  it('may be pages of several TIFF files, packed or not', async () => {
    const three = (from: number) =>
      writeTiff(
        pages.slice(from, from + 3).map((samples) => ({ samples })),
        { ...SIZE, compression: 5 },
      ).bytes;
    const files = [0, 3, 6, 9].map((from, i) => ({
      name: `part${i}.tif`,
      data: three(from),
      method: i % 2 ? 0 : 8,
    }));
    expect((await readBytes(zip(files))).frames).toEqual(pages);
  });

  it('have the archive, or the list of names and sums, as their checksum', async () => {
    const stack = zip([{ name: 'a.png', data: png(0) }]);
    const sha256 = (bytes: string | Uint8Array) => createHash('sha256').update(bytes).digest('hex');
    expect((await readBytes(stack)).report.sha256).toBe(sha256(stack.bytes));
    const lines = [0, 1].map((k) => `${sha256(png(k))}  shot_${k + 1}.png\n`);
    const folder = [1, 0].map((k) => ({ name: `shot_${k + 1}.png`, bytes: png(k) }));
    expect((await readBytes(folder)).report.sha256).toBe(sha256(lines.join('')));
  });

  it('are the first ones only, when so asked', async () => {
    const { frames } = await readBytes(folderOf(png, 'png'), { usePages: 4 });
    expect(frames).toEqual(pages.slice(0, 4));
  });
});

const evil = (name: string) =>
  zip([
    { name: 'a.png', data: png(0) },
    { name, data: png(1) },
  ]);
const entry = (o: Partial<ZipFileOptions>) =>
  zip([
    { name: 'a.png', data: png(0) },
    { name: 'b.png', data: png(1), ...o },
  ]);
const whole = writeZip([{ name: 'a.png', data: png(0) }]);
/** 40 MB of zeros: Deflate's best ratio is 1032 to 1. */
const bomb = writeTiff([{ samples: new Uint8Array(40_000_000) }], {
  width: 8000,
  height: 5000,
  bits: 8,
}).bytes;

// The sentences are those of the project's own table of bad inputs (B22 to B28, B30).
const REFUSALS: [row: string, stack: { name: string; bytes: Uint8Array }, code: string, detail: string][] = [
  [
    'B22 a path that climbs out',
    evil('../../evil.tif'),
    'ZIP_PATH',
    "Entry '../../evil.tif' points outside the archive.",
  ],
  [
    'B22 a path from the root',
    evil('/etc/evil.tif'),
    'ZIP_PATH',
    "Entry '/etc/evil.tif' points outside the archive.",
  ],
  ['B22 a drive', evil('C:/evil.tif'), 'ZIP_PATH', "Entry 'C:/evil.tif' points outside the archive."],
  ['B22 a backslash', evil('..\\evil.tif'), 'ZIP_PATH', "Entry '..\\evil.tif' points outside the archive."],
  [
    'B23 a link',
    zip([{ name: 'link.tif', data: Buffer.from('/etc/passwd'), mode: 0o120777 }]),
    'ZIP_LINK',
    "Entry 'link.tif' is a link. Links are not accepted.",
  ],
  ['B24 a bomb', zip([{ name: 'frame.tif', data: bomb }]), 'ZIP_BOMB', ''],
  [
    'B25 a size that lies, packed',
    entry({ declaredBytes: 20 }),
    'ZIP_SIZE',
    "Entry 'b.png' is larger than declared.",
  ],
  [
    'B25 a size that lies, stored',
    entry({ declaredBytes: 20, method: 0 }),
    'ZIP_SIZE',
    "Entry 'b.png' is larger than declared.",
  ],
  [
    'B25 a size that lies upwards',
    entry({ declaredBytes: 5000 }),
    'ZIP_SIZE',
    "Entry 'b.png' is smaller than declared.",
  ],
  [
    'B26 a password',
    entry({ encrypted: true }),
    'ZIP_ENCRYPTED',
    'The archive is password-protected. Upload it without a password.',
  ],
  ['B27 an entry twice', entry({ name: 'a.png' }), 'ZIP_CONTENT', "Entry 'a.png' appears twice."],
  [
    'B27 names equal but for case',
    entry({ name: 'A.png' }),
    'ZIP_CONTENT',
    "Entries 'a.png' and 'A.png' differ only in capitals.",
  ],
  [
    'B27 an archive in the archive',
    entry({ name: 'inner.zip', data: whole }),
    'ZIP_CONTENT',
    "Entry 'inner.zip' is itself an archive. Upload the frames in one archive.",
  ],
  [
    'B27 no images',
    zip([{ name: 'notes.txt', data: Buffer.from('x') }]),
    'ZIP_CONTENT',
    'The archive holds no TIFF or PNG frames.',
  ],
  ['B27 an empty archive', zip([]), 'ZIP_CONTENT', 'The archive holds no TIFF or PNG frames.'],
  [
    'B28 a cut archive',
    { name: 'a.zip', bytes: whole.subarray(0, whole.length - 30) },
    'ZIP_TRUNCATED',
    'The archive is incomplete (no end record).',
  ],
  [
    'B3 a frame of another kind',
    entry({ data: tiff(1) }),
    'TYPE_MISMATCH',
    'b.png: Named .png but contains TIFF data.',
  ],
  [
    'B1 an empty frame',
    entry({ data: Buffer.alloc(0) }),
    'EMPTY_FILE',
    'b.png: The file is empty (0 bytes).',
  ],
  [
    'B12 mixed sizes',
    entry({ data: writePng(new Uint16Array(50), { width: 10, height: 5, bits: 16 }) }),
    'MIXED_SIZE',
    'Page 2 (b.png) is 10 x 5, page 1 is 15 x 11.',
  ],
  [
    'B13 mixed depths',
    entry({ data: writePng(new Uint8Array(PIXELS), { ...SIZE, bits: 8 }) }),
    'MIXED_DEPTH',
    'Page 2 (b.png) is 8-bit, page 1 is 16-bit.',
  ],
  [
    'B14 colour',
    zip([{ name: 'a.png', data: writePng(new Uint8Array(PIXELS * 3), { ...SIZE, bits: 8, colourType: 2 }) }]),
    'COLOUR_PAGES',
    'a.png: Pages have 3 colour channels. Choose one channel or the mean.',
  ],
];

const corrupted = (change: (bytes: Buffer) => Buffer) => {
  const bytes = change(Buffer.from(png(1)));
  return [
    { name: 'frame_0041.png', bytes: png(0) },
    { name: 'frame_0042.png', bytes },
  ];
};

describe('an archive or folder that is no stack is refused', () => {
  it.each(REFUSALS)('%s', { timeout: 20_000 }, async (_row, stack, code, detail) => {
    const refusal = await refuseBytes(stack);
    expect({ code: refusal.code, detail: detail && refusal.detail }).toEqual({ code, detail });
    expect(refusal.left).toEqual([]);
  });

  it('B24: the sentence says how many times the entry expands', async () => {
    const { detail } = await refuseBytes(zip([{ name: 'frame.tif', data: bomb }]));
    const fold = Number(/^Entry 'frame\.tif' expands (\d+)-fold\. Archive refused\.$/.exec(detail)?.[1]);
    // zlib's own documentation: no ratio is above 1032.
    expect(fold).toBeGreaterThan(900);
    expect(fold).toBeLessThanOrEqual(1032);
  });

  it('B24: more bytes in all than allowed', async () => {
    const stack = zip(shuffled.map((k) => ({ name: `${k}.png`, data: png(k) })));
    const { code, detail } = await refuseBytes(stack, { expandedBytesMax: 1000 });
    expect(code).toBe('ZIP_BOMB');
    expect(detail).toMatch(/^The archive expands to 0\.1 MB; the limit is 0\.1 MB\. Archive refused\.$/);
  });

  it.each([
    ['cut', (bytes: Buffer) => bytes.subarray(0, bytes.length - 20)],
    ['cut inside the header', (bytes: Buffer) => bytes.subarray(0, 20)],
    ['changed in one byte of its pixels', (bytes: Buffer) => (bytes.writeUInt8(bytes[60]! ^ 1, 60), bytes)],
  ])('B30: a PNG frame that is %s', async (_how, change) => {
    expect(await refuseBytes(corrupted(change))).toEqual({
      code: 'PNG_CORRUPT',
      detail: 'frame_0042.png is damaged.',
      offer: { usePages: 1 },
      left: [],
    });
  });

  it('a folder without frames, or with a name twice', async () => {
    expect(await refuseBytes([{ name: 'a.txt', bytes: Buffer.from('x') }])).toMatchObject({
      code: 'FOLDER_CONTENT',
      detail: 'The folder holds no TIFF or PNG frames.',
    });
    const twice = [0, 1].map((k) => ({ name: 'a.png', bytes: png(k) }));
    expect(await refuseBytes(twice)).toMatchObject({ detail: "File 'a.png' appears twice." });
  });
});

describe('numbers of frames', () => {
  it('B29: a gap is a warning', async () => {
    const numbers = [105, 106, 110, 111, 113];
    const folder = numbers.map((n, k) => ({ name: `frame_0${n}.png`, bytes: png(k) }));
    const { report } = await inspectBytes(folder);
    expect(report.warnings).toEqual([{ code: 'FRAME_GAP', detail: 'Frames 0107-0109, 0112 are missing.' }]);
  });

  it.each([
    ['no gap', ['f1.png', 'f2.png', 'f3.png'], null],
    ['one gap', ['f1.png', 'f2.png', 'f4.png', 'f5.png'], 'Frame 3 is missing.'],
    ['every tenth number', ['f10.png', 'f20.png', 'f30.png'], null],
    ['times', ['f1700000001.png', 'f1700000002.png', 'f1800000000.png'], null],
    ['different names', ['a1.png', 'b5.png'], null],
    ['no numbers', ['a.png', 'b.png'], null],
  ])('%s', (_what, names, detail) => {
    expect(frameGaps(names)?.detail ?? null).toBe(detail);
  });

  it('order names as people count, whatever the order they came in', () => {
    // Common practice, no source.
    const ordered = [
      'f1.png',
      'f01.png',
      'f2.png',
      'f10.png',
      'f10b.png',
      'F11.png',
      'f99999999999999999998.png',
      'f99999999999999999999.png',
      'g.png',
    ];
    expect(ordered.toReversed().sort(compareNaturally)).toEqual(['f01.png', 'f1.png', ...ordered.slice(2)]);
  });
});
