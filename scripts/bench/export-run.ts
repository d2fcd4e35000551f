import { spawn } from 'node:child_process';
import { readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { trackPieces } from '@/jobs/exports/table-pieces';
import { writeTable } from '@/jobs/exports/write-tables';
import { EXPORT_FORMATS, type ExportFormat } from '@/lib/exports/export-facts';
import { TRACKS } from '@/lib/exports/table-definitions';
import type { TableTrack } from '@/lib/tables/track-rows';
import { createRandom } from '@/tracking/random';
import { figure, textTable } from './text-table';

/** Points of each made track, about what a tracer gives that is in sight for a second. */
const TRACK_POINTS = 100;
const SCALE = { pixelSize_m: 8e-6, frameInterval_s: 0.004 };
const MB = 2 ** 20;

/** Tables whose rows number as many points, in these formats, written by a process of its own. */
export interface ExportCase {
  points: number;
  formats: ExportFormat[];
}

export interface ExportRun extends ExportCase {
  seconds: number;
  /** Resident memory after the start and at its most, MB. */
  startMB: number;
  peakMB: number;
  /** Bytes of all files, MB, and how many files. */
  writtenMB: number;
  files: number;
}

/** Wandering tracks, one by one, so that the rows themselves are never in memory. */
export async function* madeTracks(points: number, seed = 1): AsyncGenerator<TableTrack> {
  const random = createRandom(seed);
  for (let track = 0, made = 0; made < points; track++) {
    const count = Math.min(TRACK_POINTS, points - made);
    made += count;
    let x = 1000 * random.uniform();
    let y = 1000 * random.uniform();
    const draw = (scale: number) => Float32Array.from({ length: count }, () => scale * random.uniform());
    yield {
      track,
      frame: Uint32Array.from({ length: count }, (_, i) => (track % 900) + i),
      xPx: Float32Array.from({ length: count }, () => (x += random.normal())),
      yPx: Float32Array.from({ length: count }, () => (y += random.normal())),
      sxPx: draw(0.1),
      syPx: draw(0.1),
      brightness: draw(900),
      flags: new Uint8Array(count),
      population: track % 3,
      pTrapped: random.uniform(),
    };
  }
}

/** What the child process does: writes the table and tells of itself. */
export async function writeMadeTable({ points, formats }: ExportCase, folder: string): Promise<ExportRun> {
  // The libraries are loaded and have written once before the clock starts and memory is looked at.
  await writeTable(folder, TRACKS, trackPieces(madeTracks(1000), SCALE, formats.includes('csv')), formats);
  const startMB = process.memoryUsage().rss / MB;
  const started = process.hrtime.bigint();
  const pieces = trackPieces(madeTracks(points), SCALE, formats.includes('csv'));
  const names = await writeTable(folder, TRACKS, pieces, formats);
  const seconds = Number(process.hrtime.bigint() - started) / 1e9;
  const sizes = await Promise.all(names.map(async (name) => (await stat(join(folder, name))).size));
  return {
    points,
    formats,
    seconds,
    startMB,
    // Kilobytes on Linux (getrusage(2)).
    peakMB: process.resourceUsage().maxRSS / 1024,
    writtenMB: sizes.reduce((sum, size) => sum + size, 0) / MB,
    files: names.length,
  };
}

/** Writes one table in a fresh process and clears its files away. */
export async function runExport(one: ExportCase, folder: string, childPath: string): Promise<ExportRun> {
  const text = await output(childPath, [JSON.stringify(one), folder]);
  for (const name of await readdir(folder)) await rm(join(folder, name), { recursive: true });
  return JSON.parse(text) as ExportRun;
}

function output(path: string, args: string[]): Promise<string> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, [path, ...args], { stdio: ['ignore', 'pipe', 'inherit'] });
    let text = '';
    child.stdout.on('data', (part: Buffer) => (text += part.toString()));
    child.on('error', reject);
    child.on('close', (code) => (code === 0 ? resolve(text) : reject(new Error(`The export ended with ${code}.`)))); // prettier-ignore
  });
}

/** A million points in every format together and alone, ten million where memory must not grow with rows. */
export function exportCases(quick: boolean): ExportCase[] {
  const million = quick ? 100_000 : 1_000_000;
  return [
    { points: million, formats: [...EXPORT_FORMATS] },
    ...EXPORT_FORMATS.map((format) => ({ points: million, formats: [format] })),
    ...(['csv', 'parquet', 'npz'] as const).map((format) => ({ points: 10 * million, formats: [format] })),
    { points: 5 * million, formats: ['hdf5'] },
  ];
}

export function exportTable(runs: readonly ExportRun[]): string {
  return textTable([
    ['tracks, points', 'formats', 'seconds', 'points/s', 'MB written', 'files', 'MB at start', 'MB at most'],
    ...runs.map((run) => [
      figure(run.points),
      run.formats.join(' '),
      figure(run.seconds),
      figure(run.points / run.seconds),
      figure(run.writtenMB),
      String(run.files),
      figure(run.startMB),
      figure(run.peakMB),
    ]),
  ]);
}

/** Formats that stream: how much more memory ten times the rows took. */
export function exportGoals(runs: readonly ExportRun[]): string[] {
  return (['csv', 'parquet', 'npz'] as const).flatMap((format) => {
    const own = runs.filter(({ formats }) => formats.length === 1 && formats[0] === format);
    const [short, long] = own.sort((a, b) => a.points - b.points);
    if (!short || !long) return [];
    const more = long.peakMB - short.peakMB;
    return [
      `${format}: ${figure(long.points)} rows at most ${figure(long.peakMB)} MB, ${more > 0 ? figure(more) : '0'} MB more than for ${figure(short.points)}; ${figure(long.writtenMB)} MB written`,
    ];
  });
}
