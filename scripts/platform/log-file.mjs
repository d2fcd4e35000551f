import { appendFileSync, mkdirSync, renameSync, statSync } from 'node:fs';
import { dirname } from 'node:path';

/** A file that has grown past this is put aside as NAME.1, so that logs never fill the disk. */
const ROTATE_AT_BYTES = 16 * 1024 * 1024;

/**
 * A log that is written at once, because the last lines before a crash are the ones that matter.
 * @param {string} path
 */
export function openLog(path) {
  mkdirSync(dirname(path), { recursive: true, mode: 0o700 });
  let size = sizeOf(path);
  let tail = '';
  return {
    path,
    /** @param {Buffer | string} chunk */
    write(chunk) {
      try {
        if (size > ROTATE_AT_BYTES) {
          renameSync(path, `${path}.1`);
          size = 0;
        }
        appendFileSync(path, chunk, { mode: 0o600 });
        size += chunk.length;
      } catch {
        // A full disk must not take the processes down whose words can't be kept.
      }
      tail = (tail + chunk.toString()).slice(-8_000);
    },
    /** Last lines of this session. @param {number} lines */
    tail: (lines) => tail.trimEnd().split('\n').slice(-lines).join('\n'),
  };
}

/** @param {string} path */
function sizeOf(path) {
  try {
    return statSync(path).size;
  } catch {
    return 0;
  }
}
