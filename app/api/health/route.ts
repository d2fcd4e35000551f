import { selectRow } from '@/models/queries/select';
import { liveWorkers } from '@/models/queries/workers';

import { assertStorageIsWritable } from '../uploads/storage-away';

export const dynamic = 'force-dynamic';

type Part = 'up' | 'down';

/** Whether the parts answer, for whoever supervises the server; nothing of their inside. */
export async function GET(): Promise<Response> {
  const database = await answers(() => selectRow('SELECT 1 AS one'));
  const queue = await answers(() => selectRow('SELECT version FROM pgboss.version'));
  const workers = await liveWorkers().catch(() => 0);
  const storage = await answers(() => assertStorageIsWritable().then(() => true));
  const healthy = database === 'up' && queue === 'up' && storage === 'up' && workers > 0;
  return Response.json(
    { status: healthy ? 'up' : 'down', database, queue, storage, workers },
    { status: healthy ? 200 : 503, headers: { 'Cache-Control': 'no-store' } },
  );
}

async function answers(ask: () => Promise<unknown>): Promise<Part> {
  return ask().then(
    (answer): Part => (answer ? 'up' : 'down'),
    (): Part => 'down',
  );
}
