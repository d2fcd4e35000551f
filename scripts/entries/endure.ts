import { chmod, mkdtemp, rm } from 'node:fs/promises';
import { randomInt } from 'node:crypto';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { parseArgs } from 'node:util';
import { BadArguments, runCommand } from '@/lib/command-line';
import { newId } from '@/lib/ids';
import { closeDatabase } from '@/models/database';
import { analyst } from '@/scripts/endure/analyst';
import { checkAll } from '@/scripts/endure/check';
import { corrector } from '@/scripts/endure/corrector';
import { cuttingProxy } from '@/scripts/endure/cutting-proxy';
import { editor } from '@/scripts/endure/editor';
import { exporter } from '@/scripts/endure/exporter';
import { drawFault, FAULTS, type Victims } from '@/scripts/endure/faults';
import { judge } from '@/scripts/endure/judge';
import { openLedger, type Ledger } from '@/scripts/endure/ledger';
import type { Client, Load } from '@/scripts/endure/load';
import { makeLab } from '@/scripts/endure/make-lab';
import { PatientClient } from '@/scripts/endure/patient-client';
import { startProduct } from '@/scripts/endure/product';
import { reader } from '@/scripts/endure/reader';
import { CONDITIONS, referenceStacks } from '@/scripts/endure/stacks';
import { uploader } from '@/scripts/endure/uploader';
import { tableSizes, tellGrowth, tellProcesses, tellTables, watchProcesses } from '@/scripts/endure/watch';
import { createRandom, type Random } from '@/tracking/random';

// The whole product under load while one thing after the other goes wrong, by chance with a seed that is told; then
// every write that it has acknowledged is looked for again.

const USAGE = 'Usage: npm run endure -- --minutes N [--seed S] [--faults on|off|NAME] [--keep]';
const WORKERS = 2;
const CLIENTS: [Client, number][] = [
  [uploader, 2],
  [analyst, 2],
  [editor, 2],
  [reader, 3],
  [corrector, 1],
  [judge, 1],
  [exporter, 1],
];
/** Between the end of one fault and the next, s. */
const CALM_S = [3, 12] as const;
/** The product is left alone for so long before the last look at it: a dead worker's work is due in 20 s, ms. */
const SETTLE_MS = 25_000;

function readArguments() {
  const { values } = parseArgs({
    options: {
      minutes: { type: 'string', default: '5' },
      seed: { type: 'string' },
      faults: { type: 'string', default: 'on' },
      keep: { type: 'boolean', default: false },
    },
  });
  const minutes = Number(values.minutes);
  const seed = values.seed === undefined ? randomInt(2 ** 31) : Number(values.seed);
  if (!(minutes > 0 && minutes <= 24 * 60) || !Number.isInteger(seed)) throw new BadArguments(USAGE);
  if (!['on', 'off'].includes(values.faults) && !(values.faults in FAULTS)) {
    throw new BadArguments(`${USAGE}\nNAME is one of: ${Object.keys(FAULTS).join(', ')}`);
  }
  return { minutes, seed, faults: values.faults, keep: values.keep };
}

async function doFaults(
  victims: Victims,
  which: string,
  random: Random,
  ledger: Ledger,
  isOver: () => boolean,
) {
  if (which === 'off') return;
  while (!isOver()) {
    await pause((CALM_S[0] + (CALM_S[1] - CALM_S[0]) * random.uniform()) * 1000);
    if (isOver()) return;
    const name = which === 'on' ? drawFault(random) : which;
    const done = await FAULTS[name].run(victims, random);
    if (done) {
      ledger.say(done);
      ledger.count(`fault: ${name}`);
    }
  }
}

async function main(): Promise<void> {
  const { minutes, seed, faults, keep } = readArguments();
  const say = (line: string) => void process.stdout.write(`${line}\n`);
  const folder = await mkdtemp(join(tmpdir(), 'beadline-endure-'));
  await chmod(folder, 0o711);
  say(`Seed ${seed}, ${minutes} minutes, in ${folder}`);
  const stacks = await referenceStacks(join(folder, 'reference'));
  const product = await startProduct(join(folder, 'data'), WORKERS, {
    BEADLINE_LIMIT_ANALYSES_PER_HOUR: '1000000',
    BEADLINE_LIMIT_CHANGES_PER_MINUTE: '1000000',
    BEADLINE_LIMIT_EXPORTS_PER_HOUR: '1000000',
    BEADLINE_LIMIT_QUIET_SECONDS: '3',
  });
  try {
    process.env.DATABASE_URL = product.databaseUrl;
    const tokens = await makeLab();
    await closeDatabase();
    const ledger = openLedger(say);
    const proxy = await cuttingProxy(product.port);
    const origin = `http://127.0.0.1:${proxy.port}`;
    const client = new PatientClient(origin, tokens.experimentalist, ledger.say);
    const annotator = new PatientClient(origin, tokens.annotator, ledger.say);
    const administrator = new PatientClient(origin, tokens.lab_administrator, ledger.say);
    const campaign = await client.post<{ id: string }>('/api/v1/campaigns', newId(), { name: 'Endurance' });
    const run = await client.post<{ id: string }>(`/api/v1/campaigns/${campaign.id}/runs`, newId(), {
      name: 'Run 1',
      drive: 'counterflow',
      ...CONDITIONS,
    });
    const end = Date.now() + minutes * 60_000;
    const isOver = () => Date.now() >= end;
    const load: Load = {
      ...{ ledger, stacks, client, annotator, administrator, campaignId: campaign.id, runId: run.id },
      ...{ recordings: [], analyses: [], isOver },
    };
    const tablesBefore = await tableSizes(product.databaseUrl);
    const watch = watchProcesses(product);
    let tablesHalfway = tablesBefore;
    const halfway = setTimeout(() => void lookHalfway(), (minutes * 60_000) / 2);
    const lookHalfway = async (): Promise<void> => {
      // The database may be away at this very moment.
      tablesHalfway = await tableSizes(product.databaseUrl).catch(() => tablesHalfway);
      if (tablesHalfway === tablesBefore && !isOver()) await pause(2_000).then(lookHalfway);
    };
    const clients = CLIENTS.flatMap(([work, count], kind) =>
      Array.from({ length: count }, (_, i) =>
        work(load, createRandom(seed + 100 * (kind + 1) + i), i).catch((cause: unknown) =>
          ledger.broken(`a client could not go on: ${(cause as Error).message}`),
        ),
      ),
    );
    await doFaults({ product, proxy, workers: WORKERS }, faults, createRandom(seed), ledger, isOver);
    await Promise.all(clients);
    ledger.say('the time is over, all clients are done; looking at everything that was acknowledged');
    await pause(SETTLE_MS);
    clearTimeout(halfway);
    const tablesAfter = await tableSizes(product.databaseUrl);
    await checkAll(load, product);
    watch.stop();
    say(`\n${tellProcesses(watch.samples, ledger)}`);
    say(`\n${tellTables(tablesBefore, tablesAfter)}\n`);
    say(`${tellGrowth([tablesBefore, tablesHalfway, tablesAfter], ledger)}\n`);
    for (const [what, count] of [...ledger.counts].sort(([a], [b]) => a.localeCompare(b)))
      say(`${count} ${what}`);
    const statuses = [...client.statuses].sort(([a], [b]) => a - b);
    say(`Answers: ${statuses.map(([status, count]) => `${count} x ${status || 'lost'}`).join(', ')}`);
    await proxy.end();
    const kept = ledger.violations.length === 0;
    say(
      kept
        ? `\nNothing that was acknowledged was lost (seed ${seed}).`
        : `\n${ledger.violations.length} promises broken (seed ${seed}):`,
    );
    for (const violation of ledger.violations) say(`  ${violation}`);
    if (!kept) process.exitCode = 1;
  } finally {
    await product.stop();
    if (keep || process.exitCode) say(`Data folder and logs: ${folder}`);
    else await rm(folder, { recursive: true, force: true });
  }
}

await runCommand(main, closeDatabase);
