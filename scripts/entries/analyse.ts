import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { basename, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';
import { z } from 'zod';
import { ComputeError } from '@/jobs/compute/compute-error';
import { ComputePool } from '@/jobs/compute/pool';
import { analyseStack } from '@/jobs/local/analyse-stack';
import { analysisReport } from '@/jobs/local/analysis-report';
import { InputError, localStack } from '@/jobs/local/local-stack';
import { stageTeller } from '@/jobs/local/tell-stages';
import { writePieces, writeTables } from '@/jobs/local/write-results';
import { codeVersion } from '@/lib/env';
import { conditionsFileSchema } from '@/lib/schemas/conditions';
import { recipeRequestSchema } from '@/lib/schemas/recipe';

const USAGE =
  'Usage: npm run --silent analyse -- STACK --conditions C.json [--recipe R.json] --out DIR [--threads N]';
const THREADS_MOST = 256;

function readArguments() {
  try {
    const { values, positionals } = parseArgs({
      allowPositionals: true,
      options: {
        conditions: { type: 'string' },
        recipe: { type: 'string' },
        out: { type: 'string' },
        threads: { type: 'string', default: '1' },
      },
    });
    const { conditions, recipe, out } = values;
    const threads = Number(values.threads);
    if (positionals.length !== 1 || !conditions || !out) throw new InputError(USAGE);
    if (!Number.isInteger(threads) || threads < 1 || threads > THREADS_MOST) {
      throw new InputError(
        `--threads must be a whole number from 1 to ${THREADS_MOST}. Received '${values.threads}'.`,
      );
    }
    return { stack: positionals[0], conditions, recipe, out: resolve(out), threads };
  } catch (cause) {
    if (cause instanceof InputError) throw cause;
    throw new InputError(`${(cause as Error).message.split('\n')[0]} ${USAGE}`);
  }
}

async function readJson<T>(path: string, schema: z.ZodType<T>): Promise<T> {
  const text = await readFile(path, 'utf8').catch(() => {
    throw new InputError(`There is no file '${path}'.`);
  });
  let parsed: unknown;
  try {
    parsed = JSON.parse(text);
  } catch (cause) {
    throw new InputError(`'${path}' is not JSON: ${(cause as Error).message}`);
  }
  const checked = schema.safeParse(parsed);
  if (checked.success) return checked.data;
  const { path: at, message } = checked.error.issues[0];
  throw new InputError(`'${path}'${at.length > 0 ? `, ${at.join('.')}` : ''}: ${message}`);
}

async function main(): Promise<void> {
  const args = readArguments();
  const conditions = await readJson(args.conditions, conditionsFileSchema);
  const recipe = args.recipe ? await readJson(args.recipe, recipeRequestSchema) : {};
  const source = await localStack(args.stack);
  const workDir = await mkdtemp(join(tmpdir(), 'beadline-analyse-'));
  const childPath = fileURLToPath(new URL('./compute-child.mjs', import.meta.url));
  const pool = new ComputePool(args.threads, { childPath });
  const tell = stageTeller(process.stderr);
  const stop = () => void pool.close().then(() => rm(workDir, { recursive: true, force: true })).then(() => process.exit(130)); // prettier-ignore
  process.once('SIGINT', stop).once('SIGTERM', stop);
  try {
    const analysis = await analyseStack(
      { source, workDir, conditions, recipe, onProgress: tell.progress },
      pool,
    );
    await writeTables(args.out, analysis, conditions);
    const stackName = basename(resolve(args.stack));
    const report = analysisReport(analysis, {
      stackName,
      conditions,
      codeVersion: codeVersion(),
      threads: args.threads,
    });
    await writePieces(join(args.out, 'report.json'), [`${JSON.stringify(report, null, 2)}\n`]);
    tell.line(`${analysis.spots} spots, ${analysis.tracks.count} tracks; results are in ${args.out}`);
  } finally {
    await pool.close();
    await rm(workDir, { recursive: true, force: true });
  }
}

/** Bad input is the person's to mend: one sentence. Anything else is a fault of ours: the whole trace. */
function endFor(cause: unknown): never {
  const theirs = cause instanceof InputError || (cause instanceof ComputeError && cause.code === 'RECIPE');
  process.stderr.write(`${theirs ? cause.message : cause instanceof Error ? cause.stack : String(cause)}\n`);
  process.exit(theirs ? 2 : 1);
}

await main().catch(endFor);
