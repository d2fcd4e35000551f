import { asLabError } from '@/auth/problem';
import { LabError } from '@/lib/errors';
import type { UploadRow } from '@/models/queries/uploads';
import { isAway, isFull, storageAway, storageFull } from './storage-away';
import { headersOf } from './tus-headers';

const codeOf = (thrown: unknown) => String((thrown as { code?: unknown } | null)?.code);

/** What the system says of the disk, in words for the sender. */
function asStorageError(thrown: unknown): unknown {
  if (thrown instanceof LabError || !isSystemError(thrown)) return thrown;
  if (isFull(codeOf(thrown))) return storageFull({}, thrown);
  return isAway(codeOf(thrown)) ? storageAway(' What has arrived is kept.', {}, thrown) : thrown;
}

const isSystemError = (thrown: unknown): boolean =>
  typeof (thrown as { syscall?: unknown } | null)?.syscall === 'string';

/** Whatever goes wrong with an upload, the answer still names its recording and when it expires. */
export async function aboutUpload<T>(row: UploadRow, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (thrown) {
    const { code, message, errors, headers, cause } = asLabError(asStorageError(thrown));
    throw new LabError(code, message, { errors, cause, headers: { ...headersOf(row), ...headers } });
  }
}
