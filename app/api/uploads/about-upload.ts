import { asLabError } from '@/auth/problem';
import { LabError } from '@/lib/errors';
import type { UploadRow } from '@/models/queries/uploads';
import { headersOf } from './tus-headers';

/** Whatever goes wrong with an upload, the answer still names its recording and when it expires. */
export async function aboutUpload<T>(row: UploadRow, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (thrown) {
    const { code, message, errors, headers, cause } = asLabError(thrown);
    throw new LabError(code, message, { errors, cause, headers: { ...headersOf(row), ...headers } });
  }
}
