import { createHash } from 'node:crypto';
import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { compareTables } from './analyst';
import { checkCorrections } from './check-corrections';
import { onDatabase } from './database';
import { assertNotes, editedRuns } from './editor';
import { checkExports } from './exporter';
import { checkVerdicts } from './judge';
import type { Load } from './load';
import type { EnduringProduct } from './product';

/** Every write that was acknowledged is looked for again, and what must not be left behind. */
export async function checkAll(load: Load, product: EnduringProduct): Promise<void> {
  await checkRecordings(load, product);
  await checkAnalyses(load);
  await checkRuns(load);
  await checkCorrections(load);
  await checkVerdicts(load);
  await checkExports(load);
  await checkLeftovers(load, product);
}

async function checkRecordings({ client, ledger, recordings }: Load, { dataDir }: EnduringProduct) {
  for (const { id, stack, asked } of recordings) {
    const now = await client.json<{ state: string; sha256: string }>(`/api/v1/recordings/${id}`);
    const stored = await readFile(join(dataDir, 'stacks', id, 'stack.bin')).catch(() => Buffer.alloc(0));
    const hash = createHash('sha256').update(stored).digest('hex');
    if (now.state !== 'ready' || now.sha256 !== stack.sha256 || hash !== stack.sha256) {
      ledger.broken(`recording ${id} (${stack.name}) is ${now.state}; its file has SHA-256 ${hash}`);
    } else ledger.count('recordings found whole');
    let found = 0;
    for (let cursor: string | null = ''; cursor !== null;) {
      const page: { items: unknown[]; nextCursor: string | null } = await client.json(
        `/api/v1/recordings/${id}/analyses?limit=200${cursor ? `&cursor=${encodeURIComponent(cursor)}` : ''}`,
      );
      found += page.items.length;
      cursor = page.nextCursor;
    }
    if (found > asked) ledger.broken(`recording ${id} has ${found} analyses when ${asked} were asked for`);
  }
}

async function checkAnalyses(load: Load): Promise<void> {
  const { client, ledger, analyses } = load;
  for (const { id, stack, state } of analyses) {
    const now = await client.json<{ state: string }>(`/api/v1/analyses/${id}`);
    if (now.state !== state) ledger.broken(`analysis ${id} was ${state}, now it is ${now.state}`);
    else if (state === 'done') await compareTables(load, id, stack);
  }
}

async function checkRuns(load: Load): Promise<void> {
  for (const run of editedRuns) {
    const { notes } = await load.client.json<{ notes: string | null }>(`/api/v1/runs/${run.id}`);
    assertNotes(load, run, notes);
    const audit = await auditEntries(load, run.id);
    if (audit < run.changes) {
      load.ledger.broken(`run ${run.id} was changed ${run.changes} times, the audit trail has ${audit}`);
    } else load.ledger.count('changes found in the audit trail', run.changes);
  }
}

let trail: string[] | null = null;
async function auditEntries({ administrator }: Load, runId: string): Promise<number> {
  trail ??= (await administrator.askPatiently('/api/v1/audit.csv')).body.toString().split('\n');
  return trail.filter((line) => line.includes(runId) && line.includes('run.changed')).length;
}

/** What must be empty when all work is done. */
const LEFTOVERS: Record<string, string> = {
  'pieces of work that are not done': `SELECT count(*)::int AS n FROM job_runs WHERE state IN ('waiting', 'running') AND kind <> 'check-files'`,
  'bells that nobody heard': `SELECT count(*)::int AS n FROM pgboss.job WHERE state < 'completed' AND created_on < now() - interval '1 minute'`,
  'staged spots of analyses that have ended': `SELECT count(*)::int AS n FROM spot_chunks c JOIN analyses a ON a.id = c.analysis_id WHERE a.state IN ('stopped', 'failed')`,
  'results of analyses that have none': `SELECT count(*)::int AS n FROM tracks t JOIN analyses a ON a.id = t.analysis_id WHERE a.state <> 'done'`,
  'analyses that never end': `SELECT count(*)::int AS n FROM analyses WHERE state IN ('waiting', 'running')`,
};

async function checkLeftovers({ ledger }: Load, { databaseUrl, dataDir }: EnduringProduct): Promise<void> {
  for (const [what, sql] of Object.entries(LEFTOVERS)) {
    const [{ n }] = await onDatabase<{ n: number }>(databaseUrl, sql);
    if (n > 0) ledger.broken(`${n} ${what}`);
  }
  const known = await onDatabase<{ id: string }>(
    databaseUrl,
    `SELECT id FROM uploads WHERE state = 'arriving'`,
  );
  const ids = new Set(known.map(({ id }) => id));
  for (const name of await readdir(join(dataDir, 'uploads')).catch(() => [])) {
    if (!ids.has(name.split('.')[0]))
      ledger.count('files of forgotten uploads, which the reconciler removes in a day');
  }
  for (const folder of await readdir(join(dataDir, 'stacks'))) {
    const files = await readdir(join(dataDir, 'stacks', folder));
    const parts = files.filter((file) => file.endsWith('.part'));
    if (parts.length > 0) ledger.count('half-written files of killed processes', parts.length);
  }
}
