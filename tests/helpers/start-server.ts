import { join } from 'node:path';
import { applicationUrlOf } from '@/scripts/platform/test-cluster.mjs';
import { cloneTemplate } from './fresh-database';
import type { SharedServer } from './server';
import { startProduct } from './start-product';

const WORKERS = 2;

/** A running product with a database of its own and no demo laboratory; `folder` is its data folder's name. */
export async function startServer(folder: string): Promise<SharedServer & { stop: () => Promise<void> }> {
  const databaseUrl = await cloneTemplate();
  const dataDir = join(process.env.TEST_FOLDER ?? '', folder);
  const product = await startProduct({
    DATABASE_URL: applicationUrlOf(databaseUrl),
    DATABASE_OWNER_URL: databaseUrl,
    BEADLINE_DATA: dataDir,
    workers: WORKERS,
  });
  return {
    baseUrl: product.baseUrl,
    databaseUrl,
    dataDir,
    stop: async () => {
      await product.stop();
    },
  };
}
