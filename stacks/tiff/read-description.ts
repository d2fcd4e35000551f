import { OutOfRangeError } from '../byte-source';
import { STACK_LIMITS } from '../limits';
import { StackRefusal } from '../refusal';
import { megabytes } from '../sentence';
import { TAG } from './tiff-tags';
import { type TiffDirectory, type TiffFile } from './tiff-file';

/** @throws StackRefusal METADATA_TOO_LARGE above 1 MB: no honest description is that long. */
export function assertDescriptionSize({ fields }: TiffDirectory): void {
  const bytes = fields.get(TAG.imageDescription)?.count ?? 0;
  if (bytes > STACK_LIMITS.descriptionBytes) {
    throw new StackRefusal(
      'METADATA_TOO_LARGE',
      `The description tag has ${megabytes(bytes)}; the limit is 1 MB.`,
    );
  }
}

/** The page's description, or null when there is none or it stands outside the file. */
export async function readDescription(file: TiffFile, directory: TiffDirectory): Promise<string | null> {
  const field = directory.fields.get(TAG.imageDescription);
  if (field?.type !== 2) return null;
  try {
    return await file.readText(field);
  } catch (cause) {
    if (cause instanceof OutOfRangeError) return null;
    throw cause;
  }
}
