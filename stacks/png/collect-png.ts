import { type ByteSource } from '../byte-source';
import { assertFrameSize } from '../check-size';
import { chosenChannel } from '../page-facts';
import { plainLayout } from '../frame-layout';
import { StackRefusal } from '../refusal';
import { shownName } from '../sentence';
import { type PagePlace, type StackCollector } from '../stack-collector';
import { PNG_HEADER_BYTES, pngChannels, readPngHeader, storedSamples } from './png-header';

/** Room for profiles and texts: a frame is read as a whole, so its file must not be much larger than it. */
const OTHER_BYTES_MAX = 16 * 1024 * 1024;

/** The refusal of a PNG frame that can't be decoded. */
export function corruptPng(name: string): StackRefusal {
  return new StackRefusal('PNG_CORRUPT', `${shownName(name)} is damaged.`);
}

/**
 * Adds one PNG file to the stack by its header; its pixels are checked with all others later.
 * @param name of the file, for the sentence
 */
export async function collectPng(
  source: ByteSource,
  collector: StackCollector,
  place: PagePlace,
  name: string,
): Promise<void> {
  const header = readPngHeader(await source.read(0, Math.min(PNG_HEADER_BYTES, source.sizeBytes)));
  if (!header) throw corruptPng(name);
  const { width, height, bits, colourType } = header;
  const channels = pngChannels(header);
  assertFrameSize(width, height, channels);
  if (bits < 8) throw new StackRefusal('SAMPLE_FORMAT', `${bits}-bit samples are not supported.`);
  const rawBytes = height * (1 + (width * storedSamples(header) * bits) / 8);
  if (source.sizeBytes > 2 * rawBytes + OTHER_BYTES_MAX) throw corruptPng(name);
  const layout = {
    ...plainLayout(width, height, { bits, sampleKind: 'uint', littleEndian: false }),
    container: 'png' as const,
    samplesPerPixel: channels,
    channel: chosenChannel(channels, collector.channel),
  };
  const facts = { width, height, bits, sampleKind: 'uint' as const, channels };
  const whole = { offsets: Float64Array.of(0), lengths: Float64Array.of(source.sizeBytes) };
  collector.add({ facts: { ...facts, bits: colourType === 3 ? 8 : bits }, layout, segments: whole }, place);
}
