import { setTimeout as pause } from 'node:timers/promises';
import { pick, type Client } from './load';
import { sha256 } from './patient-client';

/** Scrubs through frames and tracks: the same frame is the same picture, whatever happens meanwhile. */
export const reader: Client = async (load, random) => {
  const { client, ledger, recordings, analyses } = load;
  const seen = new Map<string, string>();
  const compare = async (what: string, path: string, headers: Record<string, string> = {}) => {
    const { status, body } = await client.askPatiently(path, { headers });
    const hash = `${status} ${sha256(body)}`;
    if ((seen.get(what) ?? hash) !== hash)
      ledger.broken(`${path} changed: ${seen.get(what)} before, ${hash} now`);
    seen.set(what, hash);
    ledger.count('frames and windows read');
  };
  while (!load.isOver()) {
    await pause(60);
    if (recordings.length > 0) {
      const { id, stack } = pick(recordings, random);
      const frame = random.integer(stack.frames);
      const path = `/api/v1/recordings/${id}/frames/${frame}?low=0&high=4000`;
      await compare(`${stack.name} ${frame}`, path, { accept: 'image/png' });
    }
    const done = analyses.filter(({ state }) => state === 'done');
    if (done.length > 0) {
      const { id } = pick(done, random);
      await compare(`${id} tracks`, `/api/v1/analyses/${id}/tracks?from=0&to=20`);
    }
  }
};
