import { newId } from '@/lib/ids';
import type { CorrectionList, CorrectionView } from '@/lib/views/correction-view';
import { correctedAnalyses, measured, tablesOf, type CorrectedAnalysis } from './corrector';
import type { Load } from './load';
import { untilIs } from './own-analysis';

/** So many logs are done again in calm, and must give the same tables: each takes an analysis. */
const TWINS_MOST = 4;

/** Every correction that was acknowledged is in its log, once and in its order, and none that was not. */
export async function checkCorrections(load: Load): Promise<void> {
  for (const corrected of correctedAnalyses) {
    const log = await logOf(load, corrected.id);
    const [found, wanted] = [log.map(({ id }) => id), corrected.acknowledged.map(({ id }) => id)];
    if (JSON.stringify(found) !== JSON.stringify(wanted)) {
      load.ledger.broken(
        `analysis ${corrected.id} has ${found.length} corrections when ${wanted.length} were acknowledged, or in another order`,
      );
    } else load.ledger.count('corrections found in their logs', found.length);
    if (!corrected.tables) await measured(load, corrected);
  }
  const withTables = correctedAnalyses.filter(({ tables }) => tables !== null);
  for (const corrected of withTables) {
    const now = await tablesOf(load, corrected.id);
    if (JSON.stringify(now) !== JSON.stringify(corrected.tables))
      load.ledger.broken(`corrected tables of analysis ${corrected.id} changed without a correction`);
  }
  for (const corrected of withTables.slice(-TWINS_MOST)) await checkTwin(load, corrected);
}

async function logOf({ client }: Load, id: string): Promise<CorrectionView[]> {
  const items: CorrectionView[] = [];
  for (let cursor: string | null = ''; cursor !== null;) {
    const page: CorrectionList = await client.json(
      `/api/v1/analyses/${id}/corrections?limit=200&sort=revision${cursor ? `&cursor=${encodeURIComponent(cursor)}` : ''}`,
    );
    items.push(...page.items);
    cursor = page.nextCursor;
  }
  return items;
}

/** The same corrections on a new analysis of the same recording, at once and undisturbed. */
async function checkTwin(load: Load, corrected: CorrectedAnalysis): Promise<void> {
  const { client, ledger } = load;
  const recording = load.recordings.find(({ id }) => id === corrected.recordingId);
  if (recording) recording.asked += 1;
  const path = `/api/v1/recordings/${corrected.recordingId}/analyses`;
  const { id } = await client.post<{ id: string }>(path, newId(), { recipe: {} });
  const at = `/api/v1/analyses/${id}`;
  if (!(await untilIs<{ state: string }>(load, at, id, ({ state }) => state === 'done'))) return;
  const stored = await client.askPatiently(`${at}/corrections`, {
    method: 'POST',
    headers: { 'content-type': 'application/json', 'idempotency-key': newId(), 'if-match': '"0"' },
    body: JSON.stringify({ corrections: corrected.acknowledged.map(({ sent }) => sent) }),
  });
  if (stored.status !== 201) {
    ledger.broken(`the corrections of ${corrected.id} could not be made again: ${stored.body.toString()}`);
    return;
  }
  const fresh = await untilIs<{ staleSince: string | null }>(
    load,
    at,
    id,
    ({ staleSince }) => staleSince === null,
  );
  if (!fresh) return;
  if (JSON.stringify(await tablesOf(load, id)) !== JSON.stringify(corrected.tables))
    ledger.broken(`corrected tables of analysis ${corrected.id} are not what its corrections give in calm`);
  else ledger.count('corrected analyses that give the same tables in calm');
}
