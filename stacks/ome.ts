import { XMLParser, XMLValidator } from 'fast-xml-parser';
import { type StackNote, StackRefusal } from './refusal';
import { type StackMetadata } from './stack-report';

/** What embedded OME metadata says that matters here. */
export interface OmeFacts {
  metadata: StackMetadata;
  significantBits: number | null;
  warnings: StackNote[];
}

/** Metres per unit, by the symbols of the OME schema (UnitsLength); both signs for micro occur. */
const METRES: Record<string, number> = {
  m: 1,
  cm: 1e-2,
  mm: 1e-3,
  '\u00b5m': 1e-6,
  '\u03bcm': 1e-6,
  um: 1e-6,
  nm: 1e-9,
};
/** Seconds per unit (UnitsTime). */
const SECONDS: Record<string, number> = {
  min: 60,
  s: 1,
  ms: 1e-3,
  '\u00b5s': 1e-6,
  '\u03bcs': 1e-6,
  us: 1e-6,
  ns: 1e-9,
};

const INVALID: StackNote = {
  code: 'OME_INVALID',
  detail: 'Embedded metadata is unreadable; enter pixel size and frame interval.',
};

type Element = Record<string, unknown>;

const parser = new XMLParser({
  ignoreAttributes: false,
  attributeNamePrefix: '@',
  removeNSPrefix: true,
  processEntities: false,
  parseAttributeValue: false,
  parseTagValue: false,
});

const isElement = (value: unknown): value is Element => typeof value === 'object' && value !== null;

/** The first element of that name, whether it occurs once or several times. */
function child(parent: unknown, name: string): Element | null {
  const found = isElement(parent) ? parent[name] : undefined;
  const first: unknown = Array.isArray(found) ? found[0] : found;
  return isElement(first) ? first : null;
}

/** A positive finite number of SI units, or undefined. */
function quantity(
  pixels: Element,
  name: string,
  units: Record<string, number>,
  fallback: string,
): number | undefined {
  const text = pixels[`@${name}`];
  if (typeof text !== 'string' || text.trim() === '') return undefined;
  const unit = pixels[`@${name}Unit`] ?? fallback;
  const value = Number(text) * (units[String(unit)] ?? NaN);
  return Number.isFinite(value) && value > 0 ? value : undefined;
}

function whole(element: Element, name: string): number | null {
  const value = Number(element[`@${name}`] ?? NaN);
  return Number.isInteger(value) && value > 0 ? value : null;
}

function parsePixels(xml: string): Element | null {
  if (XMLValidator.validate(xml) !== true) return null;
  try {
    return child(child(child(parser.parse(xml), 'OME'), 'Image'), 'Pixels');
  } catch {
    return null;
  }
}

function assertOneSeries(pixels: Element, samplesPerPixel: number): void {
  const channels = (whole(pixels, 'SizeC') ?? 1) / samplesPerPixel;
  if (channels > 1) {
    throw new StackRefusal(
      'MULTI_CHANNEL',
      `Found ${Math.ceil(channels)} channels; one time series of one channel is needed.`,
    );
  }
  const planes = whole(pixels, 'SizeZ') ?? 1;
  if (planes > 1) {
    throw new StackRefusal(
      'MULTI_CHANNEL',
      `Found ${planes} focal planes; one time series of one plane is needed.`,
    );
  }
}

/**
 * Pixel size and frame interval of OME metadata (OME schema 2016-06, `Pixels`: lengths are in um and
 * times in s unless a unit is given). Entities are never expanded.
 * @param description the first page's description, at most 1 MB
 * @param samplesPerPixel colour channels within a page, which OME counts as channels too
 * @throws StackRefusal MULTI_CHANNEL for several channels or focal planes, METADATA_TOO_LARGE for
 *   metadata that declares entities.
 */
export function readOme(description: string | null, samplesPerPixel: number): OmeFacts {
  if (!description || !/<(\w+:)?OME[\s>]/.test(description)) {
    return { metadata: {}, significantBits: null, warnings: [] };
  }
  if (/<!(DOCTYPE|ENTITY)/i.test(description)) {
    throw new StackRefusal(
      'METADATA_TOO_LARGE',
      'The description tag declares entities, which can expand without limit; they are not accepted.',
    );
  }
  const pixels = parsePixels(description);
  if (!pixels) return { metadata: {}, significantBits: null, warnings: [INVALID] };
  assertOneSeries(pixels, samplesPerPixel);
  const pixelSizeM = quantity(pixels, 'PhysicalSizeX', METRES, '\u00b5m');
  const frameIntervalS = quantity(pixels, 'TimeIncrement', SECONDS, 's');
  return {
    metadata: {
      ...(pixelSizeM === undefined ? {} : { pixelSizeM }),
      ...(frameIntervalS === undefined ? {} : { frameIntervalS }),
    },
    significantBits: whole(pixels, 'SignificantBits'),
    warnings: [],
  };
}
