'use client';

import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { analysisPath } from '@/components/data/use-analysis';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';
import { Moment } from '@/components/ui/moment';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { correctionWords } from '@/lib/correction-words';
import type { CorrectionList, CorrectionsStored, CorrectionView } from '@/lib/views/correction-view';

/** Others may be at work: the log is asked for again this often. */
const REFRESH_MS = 10_000;
const PAGE_MOST = 200;

interface HistoryTableProps {
  analysisId: string;
  /** Why nothing can be taken back here; null where it can. */
  reason: string | null;
}

/** Corrections of an analysis, newest first: who, when, what; each can be taken back, or all since led back. */
export function HistoryTable({ analysisId, reason }: HistoryTableProps) {
  const client = useQueryClient();
  const path = `${analysisPath(analysisId)}/corrections`;
  const key = ['corrections', analysisId];
  const [shown, setShown] = useState(PAGE_MOST);
  const [restoring, setRestoring] = useState<number | null>(null);
  const { busy, problem, act } = useAct();
  const query = useQuery({
    queryKey: [...key, shown],
    queryFn: ({ signal }) => readLog(path, shown, signal),
    refetchInterval: REFRESH_MS,
  });
  const changed = async () => {
    await client.invalidateQueries({ queryKey: key });
    await client.invalidateQueries({ queryKey: ['analysis', analysisId] });
  };

  async function takeBack({ id }: CorrectionView) {
    const body = { kind: 'undo', of: id };
    const revision = query.data?.revision;
    await act(async () => {
      try {
        await api<CorrectionsStored>(path, {
          method: 'POST',
          body,
          revision,
          idempotencyKey: crypto.randomUUID(),
        });
      } finally {
        await changed();
      }
    }, id);
  }
  async function restore() {
    const body = { revision: restoring };
    await api<CorrectionsStored>(`${path}/restore`, { method: 'POST', body, revision: query.data?.revision });
    await changed();
  }

  return (
    <>
      {problem ? <ErrorState live what={problem} /> : null}
      <Answer query={query} what="the corrections">
        {({ items, nextCursor, revision }) =>
          items.length === 0 ? (
            <EmptyState>Nobody has corrected a track of this analysis.</EmptyState>
          ) : (
            <>
              <Table label="Corrections, newest first">
                <thead>
                  <tr>
                    <HeadCell>Revision</HeadCell>
                    <HeadCell narrow="hide">When</HeadCell>
                    <HeadCell>What was done</HeadCell>
                    {reason ? null : <HeadCell>Change it</HeadCell>}
                  </tr>
                </thead>
                <tbody>
                  {items.map((item) => (
                    <Row key={item.id}>
                      <Cell quiet>{item.revision}</Cell>
                      <Cell quiet narrow="hide">
                        <Moment at={item.createdAt} />
                      </Cell>
                      <Cell>
                        {item.by?.name ?? 'Somebody'}{' '}
                        {correctionWords(
                          item,
                          items.find(({ id }) => id === item.of),
                        )}
                        {item.carriedFrom ? (
                          <span className="block text-small text-ink-3">
                            carried from another analysis of this recording
                          </span>
                        ) : null}
                        {item.inForce ? null : (
                          <span className="block text-small text-ink-3">taken back since</span>
                        )}
                      </Cell>
                      {reason ? null : (
                        <Cell>
                          <span className="flex flex-wrap gap-2">
                            {item.inForce ? (
                              <Button
                                kind="bare"
                                busy={busy === item.id}
                                aria-label={`Take back correction ${item.revision}`}
                                onClick={() => void takeBack(item)}
                              >
                                Take back
                              </Button>
                            ) : null}
                            {item.revision < revision ? (
                              <Button
                                kind="bare"
                                aria-label={`Return to revision ${item.revision}`}
                                onClick={() => setRestoring(item.revision)}
                              >
                                Return to here
                              </Button>
                            ) : null}
                          </span>
                        </Cell>
                      )}
                    </Row>
                  ))}
                </tbody>
              </Table>
              {nextCursor ? (
                <Button className="mt-2" onClick={() => setShown(shown + PAGE_MOST)}>
                  Show earlier ones
                </Button>
              ) : null}
              {reason ? (
                <p className="pt-2 text-note">{reason}</p>
              ) : (
                <Button className="mt-2" onClick={() => setRestoring(0)}>
                  Return to the tracks as linked
                </Button>
              )}
            </>
          )
        }
      </Answer>
      <ConfirmDialog
        open={restoring !== null}
        onClose={() => setRestoring(null)}
        question={restoring === 0 ? 'Return to the tracks as linked?' : `Return to revision ${restoring}?`}
        keep="Leave them"
        act="Return"
        onAct={restore}
      >
        Everything corrected since is taken back, whoever did it. Nothing is lost: it is one more step of this
        history, and can be taken back itself.
      </ConfirmDialog>
    </>
  );
}

/** The newest corrections, as many as are shown; page by page where the API gives no more at once. */
async function readLog(path: string, most: number, signal: AbortSignal): Promise<CorrectionList> {
  let log: CorrectionList | null = null;
  while (!log || (log.items.length < most && log.nextCursor)) {
    const cursor: string = log?.nextCursor ? `&cursor=${log.nextCursor}` : '';
    const page: CorrectionList = await api<CorrectionList>(
      `${path}?sort=-revision&limit=${PAGE_MOST}${cursor}`,
      { signal },
    );
    log = log ? { ...page, items: [...log.items, ...page.items] } : page;
  }
  return log;
}
