import { mkdir, readdir, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { TableDefinition } from '@/lib/exports/column';
import { dataPackage } from '@/lib/exports/data-package';
import type { ExportStage } from '@/lib/exports/export-facts';
import { ANALYSES, CORRECTIONS, DICTIONARY, JUDGEMENTS } from '@/lib/exports/history-tables';
import { worthPacking, type PackedFile } from '@/lib/exports/packed-file';
import * as texts from '@/lib/exports/package-texts';
import type { ExportPlan, PlannedAnalysis } from '@/lib/exports/plan';
import { roCrate } from '@/lib/exports/ro-crate';
import { sortedJson } from '@/lib/exports/sorted-json';
import { ANALYSIS_TABLES, TRACKS, VELOCITIES } from '@/lib/exports/table-definitions';
import { estimatesJson } from '@/lib/tables/estimates-json';
import type { JobContext } from '../job-context';
import { figuresOf } from './analysis-figure-files';
import { finishedFiles, sha256OfFile, type FilesMade, type WorkPlace } from './finished-files';
import { smallCsv } from './small-tables';
import { writeStrips } from './strip-files';
import { piecesOf, writeTable } from './write-tables';
import { ZipWriter } from './zip-writer';

export interface BuildContext extends WorkPlace {
  labId: string;
  plan: ExportPlan;
  compute: JobContext<never>['compute'];
  tell: (stage: ExportStage, share: number) => void;
}

const STRIPS_TITLE = 'Frames around the closest approach of a reconnection candidate, with both tracks';

export interface BuiltPackage {
  path: string;
  bytes: number;
  sha256: string;
}

/** Writes every file of a package, each once however many tries it takes, and packs them into one. */
export async function buildPackage(context: BuildContext): Promise<BuiltPackage> {
  await dropOtherTries(context);
  const files: PackedFile[] = [];
  files.push(...(await allTables(context)));
  if (context.plan.figures) files.push(...(await allFigures(context)), ...(await allStrips(context)));
  files.push(...(await allTexts(context)));
  files.sort((a, b) => (a.path < b.path ? -1 : 1));
  return packed(context, [...files, ...(await descriptions(context, files))]);
}

/** What a try before this one had not finished. */
async function dropOtherTries({ folder, attempt }: WorkPlace): Promise<void> {
  await mkdir(folder, { recursive: true });
  for (const name of await readdir(folder)) {
    const match = /^try-(\d+)$/.exec(name);
    if (match && Number(match[1]) < attempt) await rm(join(folder, name), { recursive: true, force: true });
  }
}

/** Rows of a table as far as they can be told before it is written. */
function rowsOf(analysis: PlannedAnalysis, table: TableDefinition): number {
  const points = analysis.summary?.trackPoints ?? 0;
  if (table === TRACKS) return points;
  return table === VELOCITIES ? points * analysis.recipe.lagsFrames.length : 1_000;
}

async function allTables(context: BuildContext): Promise<PackedFile[]> {
  const { plan, labId, signal, tell } = context;
  const units = plan.analyses.flatMap((analysis) => ANALYSIS_TABLES.map((table) => ({ analysis, table })));
  const total = units.reduce((sum, { analysis, table }) => sum + rowsOf(analysis, table), 0);
  const files: PackedFile[] = [];
  let before = 0;
  for (const { analysis, table } of units) {
    let rows = 0;
    const part = { name: `${analysis.folder}-${table.name}`, into: analysis.folder };
    const made = await finishedFiles(context, part, (folder) =>
      writeTable(
        folder,
        table,
        piecesOf(labId, analysis, table, plan.formats.includes('csv')),
        plan.formats,
        {
          signal,
          onRows: (more) => {
            rows += more;
            tell('tables', (before + Math.min(rows, rowsOf(analysis, table))) / total);
          },
        },
      ),
    );
    before += rowsOf(analysis, table);
    tell('tables', before / total);
    files.push(...described(made, analysis, table.title, table));
  }
  return files;
}

const described = (
  made: FilesMade,
  analysis: PlannedAnalysis | null,
  title: string,
  table: TableDefinition | null,
): PackedFile[] => made.map((file) => ({ ...file, title, table, analysisId: analysis?.id ?? null }));

async function allFigures(context: BuildContext): Promise<PackedFile[]> {
  const files: PackedFile[] = [];
  const { analyses } = context.plan;
  for (const [i, analysis] of analyses.entries()) {
    const figures = figuresOf(analysis);
    for (const [k, figure] of figures.entries()) {
      const part = {
        name: `${analysis.folder}-figure-${figure.name}`,
        into: `${analysis.folder}/figures`,
      };
      const made = await finishedFiles(context, part, (folder) => figure.write(folder));
      files.push(...described(made, analysis, figure.title, null));
      context.tell('figures', (i + (k + 1) / figures.length) / analyses.length);
    }
  }
  return files;
}

async function allStrips(context: BuildContext): Promise<PackedFile[]> {
  const files: PackedFile[] = [];
  for (const analysis of context.plan.analyses) {
    if (!analysis.strips?.length) continue;
    const part = { name: `${analysis.folder}-strips`, into: `${analysis.folder}/strips` };
    const made = await finishedFiles(context, part, (folder) => writeStrips(context, analysis, folder));
    files.push(...described(made, analysis, STRIPS_TITLE, null));
  }
  return files;
}

async function allTexts(context: BuildContext): Promise<PackedFile[]> {
  const { plan } = context;
  const files: PackedFile[] = [];
  const write = async (
    analysis: PlannedAnalysis | null,
    name: string,
    text: string,
    title: string,
    table: TableDefinition | null = null,
  ) => {
    const part = { name: `${analysis?.folder ?? 'root'}-text-${name}`, into: analysis?.folder ?? '' };
    const made = await finishedFiles(context, part, async (folder) => {
      await writeFile(join(folder, name), text);
      return [name];
    });
    files.push(...described(made, analysis, title, table));
  };
  for (const analysis of plan.analyses) {
    const { estimates } = analysis.measures;
    await write(analysis, 'estimates.json', estimatesJson(estimates), 'Estimates with their inputs');
    await write(analysis, 'details.json', texts.detailsJson(analysis), 'What else was measured, with notes');
    await write(analysis, 'provenance.json', texts.provenanceJson(analysis), 'Where the numbers come from');
    await write(analysis, 'corrections.csv', smallCsv(CORRECTIONS.columns, texts.correctionRows(analysis)), CORRECTIONS.title, CORRECTIONS); // prettier-ignore
    await write(analysis, 'judgements.csv', smallCsv(JUDGEMENTS.columns, texts.judgementRows(analysis)), JUDGEMENTS.title, JUDGEMENTS); // prettier-ignore
  }
  await write(null, 'README.md', texts.readmeText(plan), 'What is in the package');
  await write(null, 'analyses.csv', smallCsv(ANALYSES.columns, texts.analysesRows(plan)), ANALYSES.title, ANALYSES); // prettier-ignore
  await write(null, 'data-dictionary.csv', smallCsv(DICTIONARY.columns, texts.dictionaryRows()), DICTIONARY.title, DICTIONARY); // prettier-ignore
  return files;
}

/** What tells of all other files, and so is made last. */
async function descriptions(context: BuildContext, files: readonly PackedFile[]): Promise<PackedFile[]> {
  const { plan } = context;
  const made: PackedFile[] = [];
  const write = async (name: string, text: string, title: string) => {
    const part = { name: `root-text-${name}`, into: '' };
    const [file] = await finishedFiles(context, part, async (folder) => {
      await writeFile(join(folder, name), text);
      return [name];
    });
    made.push({ ...file, title, table: null, analysisId: null });
  };
  await write('checksums.sha256', texts.checksumLines(files), 'SHA-256 of every file');
  const all = [...files, ...made];
  await write('datapackage.json', sortedJson(dataPackage(plan, all)), 'Data Package');
  await write('ro-crate-metadata.json', sortedJson(roCrate(plan, all)), 'RO-Crate metadata');
  return made;
}

async function packed(context: BuildContext, files: readonly PackedFile[]): Promise<BuiltPackage> {
  const { folder, attempt, signal, tell } = context;
  const path = join(folder, `try-${attempt}`, 'package.zip');
  await mkdir(join(folder, `try-${attempt}`), { recursive: true });
  const total = files.reduce((sum, { bytes }) => sum + bytes, 0);
  let done = 0;
  const zip = await ZipWriter.create(path);
  try {
    for (const file of files) {
      await zip.addFile(file.path, join(folder, 'files', file.path), {
        deflate: worthPacking(file.path),
        signal,
        onBytes: (bytes) => tell('package', (done += bytes) / total),
      });
    }
    await zip.finish();
  } catch (cause) {
    await zip.abandon().catch(() => undefined);
    throw cause;
  }
  return { path, bytes: zip.bytes, sha256: await sha256OfFile(path, signal) };
}
