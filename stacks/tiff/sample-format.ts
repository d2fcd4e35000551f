import { type SampleKind } from '../frame-layout';
import { StackRefusal } from '../refusal';

const SUPPORTED: Record<SampleKind, readonly number[]> = {
  uint: [8, 10, 12, 14, 16],
  int: [8, 16],
  float: [32],
};

/** `16-bit`, `16-bit signed`, `32-bit float`. */
export function depthName(bits: number, kind: SampleKind): string {
  return `${bits}-bit${{ uint: '', int: ' signed', float: ' float' }[kind]}`;
}

/** @throws StackRefusal SAMPLE_FORMAT for samples that can't be read exactly as 32-bit floats, or are rare. */
export function assertSamples(bits: number, kind: SampleKind): void {
  if (SUPPORTED[kind].includes(bits)) return;
  const name = bits === 32 && kind !== 'float' ? '32-bit integer' : depthName(bits, kind);
  throw new StackRefusal('SAMPLE_FORMAT', `${name} samples are not supported.`);
}

/** TIFF's SampleFormat as a kind. @throws StackRefusal SAMPLE_FORMAT for complex numbers. */
export function sampleKindOf(sampleFormat: number): SampleKind {
  if (sampleFormat === 5 || sampleFormat === 6) {
    throw new StackRefusal('SAMPLE_FORMAT', 'Complex samples are not supported.');
  }
  return sampleFormat === 2 ? 'int' : sampleFormat === 3 ? 'float' : 'uint';
}
