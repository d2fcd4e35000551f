import { type InspectOptions, type StackReport, type StackSource } from './stack-report';
import { refusedReport } from './refused-report';
import { StackRefusal } from './refusal';
import { prepareStack } from './prepare-stack';

/**
 * Judges whether a file, or the files of a folder, are a stack of camera frames. Every page is read
 * once. A good stack leaves `index.bin` in `outDir` for `openStack`; anything else leaves nothing.
 * @param source paths inside `outDir` are kept relative to it, so the folder can be moved as a whole
 * @throws RangeError for options out of range, the signal's reason when it aborts, and errors of the disk;
 *   never because of a file's content.
 */
export async function inspectStack(
  source: StackSource,
  outDir: string,
  options: InspectOptions = {},
): Promise<StackReport> {
  try {
    return await prepareStack(source, outDir, options);
  } catch (cause) {
    if (cause instanceof StackRefusal) return refusedReport(cause);
    throw cause;
  }
}
