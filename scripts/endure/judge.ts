import { setTimeout as pause } from 'node:timers/promises';
import type { OwnVerdictView, ReviewQueueView } from '@/lib/views/review-view';
import { pick, type Client, type Load } from './load';
import { ownAnalysis } from './own-analysis';

const THINK_MS = 150;

/** Verdicts that the server has acknowledged on a candidate, oldest first. */
export const acknowledgedVerdicts = new Map<string, string[]>();

/** Judges the candidates of an analysis, changes its mind now and then, and goes on to another analysis. */
export const judge: Client = async (load, random) => {
  while (!load.isOver()) {
    const own = await ownAnalysis(load, random);
    if (!own) continue;
    const path = `/api/v1/analyses/${own.id}/review-queue`;
    const { items } = await load.annotator.json<ReviewQueueView>(path);
    if (items.length === 0) load.ledger.count('analyses without a candidate');
    for (const { id } of [...items, ...items.slice(0, 3)]) {
      if (load.isOver()) return;
      await judgeOnce(load, id, pick(['yes', 'no', 'cannot-tell'], random));
      await pause(THINK_MS);
    }
  }
};

async function judgeOnce({ annotator, ledger }: Load, id: string, verdict: string): Promise<void> {
  const path = `/api/v1/candidates/${id}/verdict`;
  const before = await annotator.json<OwnVerdictView>(path);
  // The same word again would be no new judgement.
  if (before.verdict === verdict) return;
  const { status, body } = await annotator.askPatiently(path, {
    method: 'PUT',
    headers: { 'content-type': 'application/json', 'if-match': `"${before.revision}"` },
    body: JSON.stringify({ verdict }),
  });
  if (status !== 200) {
    ledger.broken(`a verdict on ${id} was answered ${status}: ${body.toString().slice(0, 300)}`);
    return;
  }
  acknowledgedVerdicts.set(id, [...(acknowledgedVerdicts.get(id) ?? []), verdict]);
  ledger.count('verdicts acknowledged');
}

/** Every verdict that was acknowledged is kept, once and in its order. */
export async function checkVerdicts({ annotator, ledger }: Load): Promise<void> {
  for (const [id, wanted] of acknowledgedVerdicts) {
    const { verdict, history } = await annotator.json<OwnVerdictView>(`/api/v1/candidates/${id}/verdict`);
    const found = history.map((step) => step.verdict);
    if (JSON.stringify(found) !== JSON.stringify(wanted) || verdict !== wanted.at(-1))
      ledger.broken(`candidate ${id} was judged ${wanted.join(', ')}; kept are ${found.join(', ')}`);
    else ledger.count('verdicts found', wanted.length);
  }
}
