import { assertFrameSize } from '../check-size';
import { COMPRESSION, type FrameLayout } from '../frame-layout';
import { type ChannelChoice, chosenChannel, type PageFacts } from '../page-facts';
import { StackRefusal } from '../refusal';
import { paletteCounts } from './palette';
import { assertSamples, sampleKindOf } from './sample-format';
import { COMPRESSION_NAMES, PHOTOMETRIC_NAMES, TAG } from './tiff-tags';
import { type TiffDirectory, type TiffFile } from './tiff-file';

const WHITE_IS_ZERO = 0;
const PALETTE = 3;

export interface TiffPage {
  facts: PageFacts;
  layout: FrameLayout;
  /** Separately stored colour planes in the file, whichever of them are read. */
  storedPlanes: number;
  /** MaxSampleValue as the file states it, or null. */
  maxSampleValue: number | null;
}

const PAGE_TAGS = [
  TAG.imageWidth,
  TAG.imageLength,
  TAG.samplesPerPixel,
  TAG.compression,
  TAG.photometric,
  TAG.planarConfiguration,
  TAG.predictor,
  TAG.fillOrder,
  TAG.sampleFormat,
  TAG.rowsPerStrip,
  TAG.tileWidth,
  TAG.tileLength,
  TAG.maxSampleValue,
] as const;

/** The single numbers of a page, so that a page is described in one place. */
async function pageNumbers(file: TiffFile, { fields }: TiffDirectory) {
  const values = new Map<number, number | undefined>();
  for (const tag of PAGE_TAGS) {
    const field = fields.get(tag);
    // Nearly all stand in the directory: a list of 200,000 pages must not wait for each of them.
    if (field) values.set(tag, field.first ?? (await file.readNumbers(field, 1))[0]);
  }
  return {
    width: values.get(TAG.imageWidth),
    height: values.get(TAG.imageLength),
    samplesPerPixel: values.get(TAG.samplesPerPixel) ?? 1,
    compression: values.get(TAG.compression) ?? COMPRESSION.none,
    photometric: values.get(TAG.photometric) ?? 1,
    planar: values.get(TAG.planarConfiguration) ?? 1,
    predictor: values.get(TAG.predictor) ?? 1,
    fillOrder: values.get(TAG.fillOrder) ?? 1,
    sampleFormat: values.get(TAG.sampleFormat) ?? 1,
    rowsPerStrip: values.get(TAG.rowsPerStrip) || Infinity,
    tileWidth: values.get(TAG.tileWidth),
    tileLength: values.get(TAG.tileLength),
    maxSampleValue: values.get(TAG.maxSampleValue) ?? null,
  };
}

type PageNumbers = Awaited<ReturnType<typeof pageNumbers>>;

function assertCoding({ compression, photometric, predictor, fillOrder }: PageNumbers, bits: number): void {
  if (!(Object.values(COMPRESSION) as number[]).includes(compression)) {
    const name = COMPRESSION_NAMES[compression];
    throw new StackRefusal(
      'COMPRESSION',
      `Compression ${compression}${name ? ` (${name})` : ''} is not supported. Save as uncompressed, LZW or Deflate.`,
    );
  }
  if (photometric > 5 || photometric === 4) {
    const name = PHOTOMETRIC_NAMES[photometric];
    throw new StackRefusal(
      'SAMPLE_FORMAT',
      `Pixels of kind ${photometric}${name ? ` (${name})` : ''} are not supported. Save as grey levels.`,
    );
  }
  if (fillOrder !== 1)
    throw new StackRefusal('SAMPLE_FORMAT', 'Samples with reversed bits are not supported.');
  const known = predictor === 1 || (predictor === 2 && bits % 8 === 0) || (predictor === 3 && bits === 32);
  if (!known) {
    throw new StackRefusal(
      'COMPRESSION',
      `Predictor ${predictor} with ${bits}-bit samples is not supported. Save without a predictor.`,
    );
  }
}

/** Only the dictionary coders use a predictor; elsewhere the tag has no meaning. */
function usedPredictor({ compression, predictor }: PageNumbers): number {
  const uses = ([COMPRESSION.lzw, COMPRESSION.deflate, COMPRESSION.deflateOld] as number[]).includes(
    compression,
  );
  return uses ? predictor : 1;
}

async function sampleBits(file: TiffFile, { fields }: TiffDirectory): Promise<number> {
  const all = await file.readNumbers(fields.get(TAG.bitsPerSample), 16);
  const different = all.find((bits) => bits !== all[0]);
  if (different !== undefined) {
    throw new StackRefusal(
      'SAMPLE_FORMAT',
      `${all[0]}-bit and ${different}-bit samples in one pixel are not supported.`,
    );
  }
  return all[0] ?? 1;
}

function chunkSize(n: PageNumbers, width: number, height: number) {
  if (n.tileWidth === undefined && n.tileLength === undefined) {
    return { tiled: false, chunkWidth: width, chunkHeight: Math.min(n.rowsPerStrip, height) };
  }
  if (!n.tileWidth || !n.tileLength) throw new StackRefusal('BAD_DIMENSIONS', 'Tile width or height is 0.');
  assertFrameSize(n.tileWidth, n.tileLength, 1);
  return { tiled: true, chunkWidth: n.tileWidth, chunkHeight: n.tileLength };
}

/**
 * What a page says about its pixels.
 * @throws StackRefusal when such pixels aren't read; OutOfRangeError when its fields are cut.
 */
export async function readPage(
  file: TiffFile,
  directory: TiffDirectory,
  choice: ChannelChoice,
): Promise<TiffPage> {
  const n = await pageNumbers(file, directory);
  assertFrameSize(n.width, n.height, n.samplesPerPixel);
  const [width, height] = [n.width!, n.height!];
  const bits = await sampleBits(file, directory);
  assertCoding(n, bits);
  const sampleKind = sampleKindOf(n.sampleFormat);
  assertSamples(bits, sampleKind);
  const invert = n.photometric === WHITE_IS_ZERO;
  if (invert && sampleKind === 'float') {
    throw new StackRefusal('SAMPLE_FORMAT', 'Floating point samples with white at 0 are not supported.');
  }
  const isPalette = n.photometric === PALETTE;
  const channels = isPalette ? 3 : n.samplesPerPixel;
  const channel = chosenChannel(channels, choice);
  const separate = n.planar === 2 && n.samplesPerPixel > 1;
  return {
    facts: { width, height, bits: isPalette ? 16 : bits, sampleKind, channels },
    storedPlanes: separate ? n.samplesPerPixel : 1,
    maxSampleValue: n.maxSampleValue,
    layout: {
      container: 'raw',
      bits,
      sampleKind,
      littleEndian: file.littleEndian,
      compression: n.compression,
      predictor: usedPredictor(n),
      invert,
      samplesPerPixel: separate ? 1 : n.samplesPerPixel,
      planes: separate && channel === 'mean' ? n.samplesPerPixel : 1,
      channel,
      ...chunkSize(n, width, height),
      palette: isPalette ? await paletteCounts(file, directory, bits, channel) : null,
    },
  };
}
