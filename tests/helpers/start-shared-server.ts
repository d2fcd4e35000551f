import { join } from 'node:path';
import type { TestProject } from 'vitest/node';
import { applicationUrlOf } from '@/scripts/platform/test-cluster.mjs';
import { cloneTemplate } from './fresh-database';
import { startProduct } from './start-product';

const WORKERS = 2;

/** Starts the product once for all API and browser tests; vitest calls it only when one of them was chosen. */
export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const databaseUrl = await cloneTemplate();
  const dataDir = join(process.env.TEST_FOLDER ?? '', 'server');
  const product = await startProduct({
    DATABASE_URL: applicationUrlOf(databaseUrl),
    DATABASE_OWNER_URL: databaseUrl,
    BEADLINE_DATA: dataDir,
    workers: WORKERS,
  });
  project.provide('sharedServer', { baseUrl: product.baseUrl, databaseUrl, dataDir });
  return async () => {
    await product.stop();
  };
}
