import { execFile } from 'node:child_process';
import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { makeDemoStack, type DemoScene } from '@/jobs/demo/make-demo-stack';
import { rootDir } from '@/lib/env';
import type { Conditions } from '@/tracking/types';
import { sha256 } from './patient-client';

/** Tables that an analysis must give, byte for byte as the command line does without a server. */
export const TABLES = [
  'tracks.csv',
  'velocities.csv',
  'velocity-pdf.csv',
  'reconnections.csv',
  'estimates.json',
] as const;

export interface ReferenceStack {
  name: string;
  bytes: Buffer;
  sha256: string;
  frames: number;
  /** SHA-256 of each table. */
  tables: Record<(typeof TABLES)[number], string>;
}

export const CONDITIONS: Conditions = {
  pixelSize_m: 8e-6,
  frameInterval_s: 4e-3,
  exposure_s: 5e-4,
  sheetThickness_m: 1e-4,
  temperature_K: 1.85,
  heatFlux_W_m2: 300,
  flowDirection: [1, 0],
  tracer: { species: 'solid deuterium', diameter_m: 4e-6, density_kg_m3: 202 },
};

export const SCENE: DemoScene = {
  widthPx: 160,
  heightPx: 160,
  frames: 48,
  lineDensityM2: 4e7,
  trappedInSight: 40,
  freeInSight: 25,
  vnMPerS: 1.8e-3,
  tangleMPerS: -0.8e-3,
  events: 2,
  brightnessE: 700,
  seed: 11,
};

/** Different lengths, so that a mix-up of files shows at once. */
const FRAMES = [48, 64, 96];

/** Simulated stacks with what the same kernels make of them, computed once without a server and without faults. */
export async function referenceStacks(folder: string): Promise<ReferenceStack[]> {
  const conditionsFile = join(folder, 'conditions.json');
  await mkdir(folder, { recursive: true });
  await writeFile(conditionsFile, JSON.stringify(CONDITIONS));
  const stacks: ReferenceStack[] = [];
  for (const [i, frames] of FRAMES.entries()) {
    const name = `reference-${i}.tif`;
    const path = join(folder, name);
    await makeDemoStack(path, { ...SCENE, frames, seed: SCENE.seed + i }, CONDITIONS);
    const out = join(folder, `tables-${i}`);
    const args = ['scripts/analyse.mjs', path, '--conditions', conditionsFile, '--out', out];
    await promisify(execFile)(process.execPath, args, { cwd: rootDir() });
    const bytes = await readFile(path);
    const hashes = await Promise.all(
      TABLES.map(async (table) => [table, sha256(await readFile(join(out, table)))]),
    );
    stacks.push({
      name,
      bytes,
      sha256: sha256(bytes),
      frames,
      tables: Object.fromEntries(hashes) as ReferenceStack['tables'],
    });
  }
  return stacks;
}
