import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { cloneTemplate, dropDatabase } from '../helpers/fresh-database';
import { startProduct } from '../helpers/start-product';

it('a start with no workers of its own becomes ready, says so, and its health tells that none is there', async () => {
  const data = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'no-workers-'));
  const url = await cloneTemplate();
  const product = await startProduct({ BEADLINE_DATA: data, DATABASE_URL: url, workers: 0 });
  try {
    expect(product.printed()).toContain('No workers here');
    const health = await fetch(`${product.baseUrl}/api/health`);
    expect([health.status, await health.json()]).toEqual([
      503,
      expect.objectContaining({ status: 'down', database: 'up', workers: 0 }),
    ]);
    expect((await fetch(`${product.baseUrl}/sign-in`)).status).toBe(200);
  } finally {
    expect(await product.stop()).toBe(0);
    await dropDatabase(url);
    rmSync(data, { recursive: true, force: true });
  }
});
