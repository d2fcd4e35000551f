import type { Scene, SceneCamera } from '../simulate/scene';
import type { RehearsalKind } from './plan';

/** What a rehearsal was made of, kept beside its frames. */
export interface RehearsalTruth {
  kind: RehearsalKind;
  /** All tracers of a simulated recording; only the planted ones of another. */
  scene: Scene;
  /** For planted particles the camera as measured, its background the mean of the recording. */
  camera: SceneCamera;
  made: {
    pixelSizeM: number;
    frameIntervalS: number;
    exposureS: number | null;
    sheetThicknessM: number;
    /** L^-1/2; null where there are no lines. */
    spacingM: number | null;
    /** Trapped tracers per line length. */
    beadsPerMetre: number | null;
  };
}

/** "BDRT" read as a little-endian number. */
const MAGIC = 0x54524442;
const VERSION = 1;
/** Magic, version, bytes of the JSON head, tracers, points. */
const HEAD_NUMBERS = 5;
const HEAD_BYTES = 4 * HEAD_NUMBERS;

type Head = Omit<RehearsalTruth, 'scene'> & {
  scene: Pick<Scene, 'widthPx' | 'heightPx' | 'frames' | 'events' | 'captures'> & {
    lineDensityM2: number | null;
  };
};

const padded = (bytes: number) => Math.ceil(bytes / 4) * 4;

/**
 * A truth as bytes, little-endian: head, what is not per point as JSON, then start, frame, line
 * (32-bit integers), x, y, brightness (32-bit floats), kind (a byte each).
 */
export function encodeTruth({ scene, ...rest }: RehearsalTruth): Uint8Array {
  const { widthPx, heightPx, frames, events, captures, tracers } = scene;
  const lineDensityM2 = Number.isNaN(scene.lineDensityM2) ? null : scene.lineDensityM2;
  const head: Head = { ...rest, scene: { widthPx, heightPx, frames, events, captures, lineDensityM2 } };
  const json = asciiBytes(JSON.stringify(head));
  const points = scene.frame.length;
  const at = HEAD_BYTES + padded(json.length);
  const bytes = new Uint8Array(at + 4 * (tracers + 1 + tracers + 4 * points) + tracers);
  new Uint32Array(bytes.buffer, 0, HEAD_NUMBERS).set([MAGIC, VERSION, json.length, tracers, points]);
  bytes.set(json, HEAD_BYTES);
  const parts = partsOf(bytes.buffer, at, tracers, points);
  for (const name of Object.keys(parts) as (keyof typeof parts)[]) parts[name].set(scene[name]);
  return bytes;
}

/** @throws RangeError when the bytes are no truth of this version, or cut. */
export function decodeTruth(encoded: Uint8Array): RehearsalTruth {
  // A copy of its own starts where 32-bit views may start.
  const bytes = new Uint8Array(encoded);
  if (bytes.length < HEAD_BYTES) throw new RangeError(`A truth has more than ${bytes.length} bytes.`);
  const [magic, version, jsonBytes, tracers, points] = new Uint32Array(bytes.buffer, 0, HEAD_NUMBERS);
  if (magic !== MAGIC || version !== VERSION) {
    throw new RangeError(`Got truth ${magic} v${version} when expected ${MAGIC} v${VERSION}.`);
  }
  const at = HEAD_BYTES + padded(jsonBytes);
  const length = at + 4 * (tracers + 1 + tracers + 4 * points) + tracers;
  if (bytes.length !== length) throw new RangeError(`Got ${bytes.length} bytes when this truth has ${length}.`); // prettier-ignore
  const text = Array.from(bytes.subarray(HEAD_BYTES, HEAD_BYTES + jsonBytes), (byte) => String.fromCharCode(byte)); // prettier-ignore
  const head = JSON.parse(text.join('')) as Head;
  const lineDensityM2 = head.scene.lineDensityM2 ?? Number.NaN;
  return { ...head, scene: { ...head.scene, lineDensityM2, tracers, ...partsOf(bytes.buffer, at, tracers, points) } }; // prettier-ignore
}

function partsOf(buffer: ArrayBuffer, from: number, tracers: number, points: number) {
  let at = from;
  const next = (entries: number) => {
    const begin = at;
    at += 4 * entries;
    return [buffer, begin, entries] as const;
  };
  return {
    start: new Uint32Array(...next(tracers + 1)),
    line: new Int32Array(...next(tracers)),
    frame: new Uint32Array(...next(points)),
    xPx: new Float32Array(...next(points)),
    yPx: new Float32Array(...next(points)),
    brightnessE: new Float32Array(...next(points)),
    kind: new Uint8Array(buffer, at, tracers),
  };
}

/** The head is numbers and our own words: nothing beyond ASCII. */
const asciiBytes = (text: string) => Uint8Array.from(text, (letter) => letter.charCodeAt(0));
