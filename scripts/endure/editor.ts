import { setTimeout as pause } from 'node:timers/promises';
import { newId } from '@/lib/ids';
import type { Client, Load } from './load';

interface RunAnswer {
  id: string;
  notes: string | null;
}

/** What a run's notes must say: the last text acknowledged, or one that was sent later and whose answer was lost. */
export interface EditedRun {
  id: string;
  acknowledged: string;
  possible: Set<string>;
  changes: number;
}

export const editedRuns: EditedRun[] = [];

/** Changes the notes of a run of its own again and again, each time from the revision it knows. */
export const editor: Client = async (load, _, number) => {
  const { client, ledger, campaignId } = load;
  const made = await client.post<RunAnswer>(`/api/v1/campaigns/${campaignId}/runs`, newId(), {
    name: `Notes ${number}`,
    notes: 'begun',
  });
  const run: EditedRun = { id: made.id, acknowledged: 'begun', possible: new Set(['begun']), changes: 0 };
  editedRuns.push(run);
  for (let n = 0; !load.isOver(); n++) {
    const now = await client.askPatiently(`/api/v1/runs/${run.id}`);
    assertNotes(load, run, (JSON.parse(now.body.toString()) as RunAnswer).notes);
    const notes = `change ${n}`;
    run.possible.add(notes);
    const answer = await client.ask(`/api/v1/runs/${run.id}`, {
      method: 'PATCH',
      headers: { 'content-type': 'application/json', 'if-match': now.headers.get('etag') ?? '' },
      body: JSON.stringify({ notes }),
    });
    if (answer?.status === 200) {
      run.acknowledged = notes;
      run.possible = new Set([notes]);
      run.changes += 1;
      ledger.count('changes acknowledged');
    } else if (answer && answer.status < 500 && ![412, 429].includes(answer.status)) {
      // 412: a change whose answer was lost has come through since.
      ledger.broken(`a change of run ${run.id} was answered ${answer.status}: ${answer.body.toString()}`);
    }
    await pause(150);
  }
};

export function assertNotes({ ledger }: Load, run: EditedRun, notes: string | null): void {
  if (notes !== null && run.possible.has(notes)) return;
  ledger.broken(`run ${run.id} says '${notes}' when '${run.acknowledged}' was acknowledged last`);
}
