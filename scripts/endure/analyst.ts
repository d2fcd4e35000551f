import { setTimeout as pause } from 'node:timers/promises';
import { newId } from '@/lib/ids';
import { pick, type Client, type KnownRecording, type Load } from './load';
import { sha256 } from './patient-client';
import { TABLES, type ReferenceStack } from './stacks';

const STOP_SHARE = 0.15;
const ENDS_WITHIN_MS = 300_000;

interface AnalysisAnswer {
  id: string;
  state: 'waiting' | 'running' | 'done' | 'failed' | 'stopped';
  error: { code: string; detail: string } | null;
}

/** Starts analyses, stops a few, and compares every table of the others with what they must be. */
export const analyst: Client = async (load, random) => {
  const { client, ledger, recordings } = load;
  while (!load.isOver()) {
    if (recordings.length === 0) {
      await pause(300);
      continue;
    }
    const recording = pick(recordings, random);
    const id = await start(load, recording);
    const stops = random.uniform() < STOP_SHARE;
    if (stops) {
      await pause(random.uniform() * 3000);
      await client.askPatiently(`/api/v1/analyses/${id}/stop`, { method: 'POST' });
    }
    const state = await untilEnd(load, id);
    if (state === 'stopped' && !stops) ledger.broken(`analysis ${id} was stopped by nobody`);
    if (state === 'stopped') {
      load.analyses.push({ id, stack: recording.stack, state });
      ledger.count('analyses stopped');
    }
    if (state !== 'done') continue;
    await compareTables(load, id, recording.stack);
    load.analyses.push({ id, stack: recording.stack, state });
    ledger.count('analyses done');
  }
};

async function start({ client }: Load, recording: KnownRecording): Promise<string> {
  recording.asked += 1;
  const path = `/api/v1/recordings/${recording.id}/analyses`;
  return (await client.post<AnalysisAnswer>(path, newId(), { recipe: {} })).id;
}

async function untilEnd(load: Load, id: string): Promise<AnalysisAnswer['state'] | 'broken'> {
  const { client, administrator, ledger } = load;
  const end = Date.now() + ENDS_WITHIN_MS;
  for (;;) {
    const { state, error } = await client.json<AnalysisAnswer>(`/api/v1/analyses/${id}`);
    if (state === 'done' || state === 'stopped') return state;
    if (state === 'failed') {
      // A piece of work that has lost three workers is given up, and a person asks for it again.
      const job = /\(job ([0-9a-f-]{36})\)/.exec(error?.detail ?? '')?.[1];
      ledger.say(`analysis ${id} was given up: ${error?.detail}`);
      ledger.count('analyses given up and asked for again');
      const again = job
        ? await administrator.askPatiently(`/api/v1/jobs/${job}/again`, { method: 'POST' })
        : null;
      if (!again || again.status >= 400) {
        ledger.broken(
          `analysis ${id} failed and can't be run again: ${again?.body.toString() ?? error?.detail}`,
        );
        return 'broken';
      }
    }
    if (Date.now() > end) {
      ledger.broken(`analysis ${id} is still ${state} after ${ENDS_WITHIN_MS / 1000} s`);
      return 'broken';
    }
    await pause(500);
  }
}

/** Every table of an analysis that is done must be what it is without a server and without faults. */
export async function compareTables(
  { client, ledger }: Load,
  id: string,
  stack: ReferenceStack,
): Promise<void> {
  for (const table of TABLES) {
    const { status, body } = await client.askPatiently(`/api/v1/analyses/${id}/${table}?corrections=none`);
    const same = status === 200 && sha256(body) === stack.tables[table];
    if (same) ledger.count('tables compared');
    else
      ledger.broken(
        `${table} of analysis ${id} (${stack.name}) is not what it must be: ${status}, ${body.length} bytes`,
      );
  }
}
