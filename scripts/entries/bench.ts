import { mkdir, mkdtemp, rm } from 'node:fs/promises';
import { cpus, tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { ComputePool } from '@/jobs/compute/pool';
import { writeTiff } from '@/jobs/demo/write-tiff';
import { analyseStack, type LocalAnalysis } from '@/jobs/local/analyse-stack';
import { localStack } from '@/jobs/local/local-stack';
import { codeVersion } from '@/lib/env';
import { createRenderer } from '@/tracking/simulate/render';
import { standardCamera, standardScene } from '@/tracking/simulate/standard-scene';

// Throughputs of the whole road on a simulated recording: 512 x 512 px, about 300 tracers, SNR 4.
// Clocks on a busy machine lie; ratios within one run are what to compare.

const FRAMES = 96;
const SEED = 1;
const CONDITIONS = { pixelSize_m: 1e-5, frameInterval_s: 5e-3, sheetThickness_m: 1e-4 };
const MEGA = 1e6;

async function makeStack(path: string): Promise<void> {
  const scene = standardScene({ snr: 4, seed: SEED, frames: FRAMES });
  const renderer = createRenderer(scene, standardCamera(SEED));
  const { widthPx: width, heightPx: height, frames } = scene;
  await writeTiff(path, { width, height, frames, frame: (index) => renderer.renderFrame(index) });
}

function figures(round: string, children: number, analysis: LocalAnalysis) {
  const { stack, timingsS, spots, tracks, readingShare } = analysis;
  const megapixels = (stack.frames * stack.width * stack.height) / MEGA;
  const links = tracks.frame.length - tracks.count;
  const per = (amount: number, seconds: number) => Number((amount / seconds).toPrecision(3));
  const wholeS = Object.values(timingsS).reduce((sum, seconds) => sum + seconds, 0);
  return {
    round,
    children,
    check_Mpx_s: per(megapixels, timingsS.check),
    measureImage_s: Number(timingsS['measure-image'].toFixed(2)),
    detect_Mpx_s: per(megapixels, timingsS['detect-spots']),
    detect_spots_s: per(spots, timingsS['detect-spots']),
    shareOfReading: Number(readingShare.toFixed(3)),
    link_links_s: per(links, timingsS['link-tracks']),
    measureFlow_points_s: per(tracks.frame.length, timingsS['measure-flow']),
    whole_Mpx_s: per(megapixels, wholeS),
  };
}

const folder = await mkdtemp(join(tmpdir(), 'beadline-bench-'));
const childPath = fileURLToPath(new URL('./compute-child.mjs', import.meta.url));
const say = (line: Record<string, unknown>) => process.stdout.write(`${JSON.stringify(line)}\n`);
try {
  const path = join(folder, 'standard.tif');
  process.stderr.write('Simulating the recording\n');
  await makeStack(path);
  const source = await localStack(path);
  say({
    codeVersion: codeVersion(),
    cpus: cpus().length,
    cpu: cpus()[0]?.model,
    frames: FRAMES,
    size: '512 x 512',
  });
  const detect: Record<string, number> = {};
  for (const children of [1, 2]) {
    const pool = new ComputePool(children, { childPath });
    // The first round also warms the children's compilers; both are told.
    for (const round of ['cold', 'warm']) {
      const workDir = join(folder, `${children}-${round}`);
      await mkdir(workDir);
      const analysis = await analyseStack({ source, workDir, conditions: CONDITIONS, recipe: {} }, pool);
      const line = figures(round, children, analysis);
      detect[`${children}-${round}`] = line.detect_Mpx_s;
      say(line);
    }
    await pool.close();
  }
  const ratio = (a: string, b: string) => Number((detect[a] / detect[b]).toFixed(2));
  say({
    ratio_detect_warm_over_cold: ratio('1-warm', '1-cold'),
    ratio_detect_two_children_over_one: ratio('2-warm', '1-warm'),
  });
} finally {
  await rm(folder, { recursive: true, force: true });
}
