import { Sha256 } from '../sha256';

const END_BYTES = 65_536;

/** What tells a file from another without reading all of it. */
export interface FileFingerprint {
  bytes: number;
  /** SHA-256 of the first and the last 64 KiB, hexadecimal. */
  ends: string;
}

/** Reads both ends of a file. Pages of a stack differ in their first and last bytes where stacks differ. */
export async function fingerprintOf(file: Blob): Promise<FileFingerprint> {
  const hash = new Sha256();
  hash.update(new Uint8Array(await file.slice(0, END_BYTES).arrayBuffer()));
  const tail = Math.max(END_BYTES, file.size - END_BYTES);
  if (tail < file.size) hash.update(new Uint8Array(await file.slice(tail).arrayBuffer()));
  return { bytes: file.size, ends: hash.hex() };
}

/** An upload that waits for its file. `ends` is null where this browser did not begin it. */
export interface ExpectedFile {
  filename: string;
  bytes: number;
  ends: string | null;
}

/**
 * Why a file can't go on with an upload that was begun earlier; null when it can. Its name may have
 * changed since, its content may not.
 */
export function refuseOtherFile(
  expected: ExpectedFile,
  chosen: { name: string } & FileFingerprint,
): string | null {
  if (chosen.bytes !== expected.bytes) {
    return `${chosen.name} has ${group(chosen.bytes)} bytes, but ${expected.filename} has ${group(expected.bytes)}. Choose the file that was being sent.`;
  }
  if (expected.ends !== null ? chosen.ends !== expected.ends : chosen.name !== expected.filename) {
    return `${chosen.name} is as long as ${expected.filename}, but is another file. Choose the one that was being sent.`;
  }
  return null;
}

const group = (bytes: number) => String(bytes).replace(/\B(?=(\d{3})+$)/g, '\u2009');
