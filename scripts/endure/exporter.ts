import { setTimeout as pause } from 'node:timers/promises';
import { newId } from '@/lib/ids';
import type { ExportView } from '@/lib/views/export-view';
import { pick, type Client, type Load } from './load';
import { untilIs } from './own-analysis';
import { sha256 } from './patient-client';

const THINK_MS = 2_000;
/** Each must be found again with the same bytes, so not too many are kept in mind. */
const CHECKED_MOST = 20;

interface Built {
  id: string;
  sha256: string;
}

const built: Built[] = [];
/** SHA-256 of the package of an analysis: the same analysis makes the same bytes. */
const packages = new Map<string, string>();

/** Asks for data packages of analyses that are done, and downloads them. */
export const exporter: Client = async (load, random) => {
  while (!load.isOver()) {
    const done = load.analyses.filter(({ state }) => state === 'done');
    if (done.length === 0) {
      await pause(300);
      continue;
    }
    const analysis = pick(done, random);
    const body = { analyses: [analysis.id], formats: ['csv', 'npz'], figures: false, contributors: [] };
    const { id } = await load.client.post<ExportView>('/api/v1/exports', newId(), body);
    const path = `/api/v1/exports/${id}`;
    const end = await untilIs<ExportView>(load, path, id, ({ state }) => state === 'done');
    if (!end) continue;
    built.push({ id, sha256: end.sha256! });
    const before = packages.get(analysis.id) ?? end.sha256!;
    packages.set(analysis.id, before);
    if (before !== end.sha256)
      load.ledger.broken(`the package of analysis ${analysis.id} has other bytes than before`);
    await assertBytes(load, built.at(-1)!);
    load.ledger.count('data packages built');
    await pause(THINK_MS);
  }
};

async function assertBytes({ client, ledger }: Load, { id, sha256: wanted }: Built): Promise<void> {
  const { status, body } = await client.askPatiently(`/api/v1/exports/${id}/file`);
  if (status !== 200 || sha256(body) !== wanted)
    ledger.broken(`the file of export ${id} is not what was said of it: ${status}, ${body.length} bytes`);
  else ledger.count('data packages downloaded');
}

/** Packages that were said to be done are there, with the bytes that were told. */
export async function checkExports(load: Load): Promise<void> {
  for (const one of built.slice(-CHECKED_MOST)) await assertBytes(load, one);
}
