import { rm } from 'node:fs/promises';
import { join } from 'node:path';
import { dataDir } from '@/lib/env';

/** Where a package is built and kept. */
export const exportFolder = (exportId: string): string => join(dataDir(), 'exports', exportId);

export const packageFile = (exportId: string): string => join(exportFolder(exportId), 'package.zip');

/** Files of a package on their way, kept between tries. */
export const workFolder = (exportId: string): string => join(exportFolder(exportId), 'work');

export const dropExport = (exportId: string): Promise<void> =>
  rm(exportFolder(exportId), { recursive: true, force: true });
