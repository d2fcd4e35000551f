import { rename, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { dataDir } from '@/lib/env';
import { objectStore, putFile } from '../object-store';

/** Where a package is built and kept. */
export const exportFolder = (exportId: string): string => join(dataDir(), 'exports', exportId);

export const packageFile = (exportId: string): string => join(exportFolder(exportId), 'package.zip');

/** Files of a package on their way, kept between tries. */
export const workFolder = (exportId: string): string => join(exportFolder(exportId), 'work');

/** Name of a finished package in the object store. */
export const packageKey = (exportId: string): string => `exports/${exportId}/package.zip`;

/** Before a package counts as finished: with an object store its bytes are there. */
export async function storePackage(exportId: string, made: string): Promise<void> {
  const store = objectStore();
  if (store) await putFile(store, packageKey(exportId), made);
}

/** Moves a package of this machine to where it is fetched from; one in the object store is there already. */
export async function placePackage(exportId: string, made: string): Promise<void> {
  if (!objectStore()) await rename(made, packageFile(exportId));
}

/** Bytes of a finished package; null where it is no longer stored. */
export async function packageBytes(exportId: string): Promise<number | null> {
  const store = objectStore();
  if (store) return (await store.head(packageKey(exportId)))?.bytes ?? null;
  return stat(packageFile(exportId)).then(
    ({ size }) => size,
    () => null,
  );
}

export async function dropExport(exportId: string): Promise<void> {
  await rm(exportFolder(exportId), { recursive: true, force: true });
  await objectStore()?.remove(packageKey(exportId));
}
