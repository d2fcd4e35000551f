import { createHash } from 'node:crypto';
import { existsSync, mkdtempSync, readFileSync, readdirSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it, vi } from 'vitest';
import { buildExportHandler } from '@/jobs/build-export.handler';
import { closeDoorbell } from '@/jobs/doorbell';
import { exportFolder, packageFile } from '@/jobs/exports/export-folder';
import type { JobContext } from '@/jobs/job-context';
import { getSequelize } from '@/models/database';
import { getExport } from '@/models/queries/exports';
import { orderPackage } from '../../helpers/built-package';
import { disk, revive } from '../../helpers/dying-disk';
import { freshDatabase, type FreshDatabase } from '../../helpers/fresh-database';
import { makeLab, type LabRows } from '../../helpers/lab-rows';
import { measuredAnalysis } from '../../helpers/measured-analysis';

vi.mock('node:fs/promises', async (original) => {
  const { dyingDisk } = await import('../../helpers/dying-disk');
  return dyingDisk(await original());
});

let db: FreshDatabase;
let lab: LabRows;
let analysisId: string;

beforeAll(async () => {
  db = await freshDatabase();
  process.env.BEADLINE_DATA = mkdtempSync(join(process.env.TEST_FOLDER ?? tmpdir(), 'exports-'));
  lab = await makeLab();
  analysisId = (await measuredAnalysis(lab)).id;
});
afterAll(({}, suite) => db.dropIfGreen({}, suite));
afterAll(closeDoorbell);

const order = () => orderPackage(lab, { analyses: [analysisId], formats: ['csv'], figures: false });
const sha256 = (path: string) => createHash('sha256').update(readFileSync(path)).digest('hex');

/** One try at a package, as a worker makes it. */
const build = (subjectId: string, attempt: number) =>
  buildExportHandler.run({
    claim: { labId: lab.labId, subjectId, attempt },
    signal: new AbortController().signal,
    report: () => undefined,
    commit: (work: Parameters<JobContext<never>['commit']>[0]) => getSequelize().transaction(work),
  } as unknown as JobContext<never>);

it('F24 a package whose worker was killed at its first, second, ... step on disk comes out the same, and never half', async () => {
  const first = await order();
  await build(first, 1);
  const whole = sha256(packageFile(first));
  let killed = 0;
  for (let n = 1; ; n++) {
    const id = await order();
    Object.assign(disk, { at: n, count: 0, isDead: false, below: id });
    await build(id, 1).catch(() => undefined);
    const { isDead } = disk;
    revive();
    if (isDead) {
      killed += 1;
      // What stands under the name of the package is all of it, or nothing.
      if (existsSync(packageFile(id))) expect(sha256(packageFile(id)), `step ${n}`).toBe(whole);
      await build(id, 2);
    }
    const { state, sha256: told } = await getExport(lab.labId, id);
    expect([n, state, told, sha256(packageFile(id))]).toEqual([n, 'done', whole, whole]);
    if (isDead) continue;
    expect(readdirSync(exportFolder(id))).toEqual(['package.zip']);
    break;
  }
  expect(killed).toBeGreaterThan(10);
}, 240_000);
