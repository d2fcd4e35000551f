'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { ApiError, api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { analysisPath } from '@/components/data/use-analysis';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';
import { Moment } from '@/components/ui/moment';
import { ErrorState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { formatCount } from '@/lib/format/count';
import type { AnalysisView } from '@/lib/views/analysis-view';
import type { CarryReport, CorrectionList } from '@/lib/views/correction-view';
import { carryWords } from './carry-words';
import { LeftTable } from './left-table';
import { useOtherCorrected } from './use-other-corrected';

interface CarrySectionProps {
  analysis: AnalysisView;
  /** Why nothing can be corrected here; null where it can. */
  reason: string | null;
}

interface Asked {
  from: AnalysisView;
  report: CarryReport;
}

/** Corrections of other analyses of the same recording: what of them can be carried here, and what could not be. */
export function CarrySection({ analysis, reason }: CarrySectionProps) {
  const client = useQueryClient();
  const others = useOtherCorrected(analysis, true);
  const [asked, setAsked] = useState<Asked | null>(null);
  const [done, setDone] = useState<Asked | null>(null);
  const { busy, problem, act: attempt } = useAct();
  const path = `${analysisPath(analysis.id)}/corrections`;

  async function carry(from: AnalysisView, preview: boolean, revision: number): Promise<CarryReport> {
    const key = preview ? {} : { idempotencyKey: crypto.randomUUID() };
    return api<CarryReport>(`${path}/carry`, {
      method: 'POST',
      body: { from: from.id, preview },
      revision,
      ...key,
    });
  }
  const ask = (from: AnalysisView) =>
    attempt(async () => {
      setDone(null);
      const { revision } = await api<CorrectionList>(`${path}?limit=1`);
      setAsked({ from, report: await carry(from, true, revision) });
    }, from.id);
  async function act() {
    const { from, report } = asked!;
    try {
      setDone({ from, report: await carry(from, false, report.revision) });
    } catch (error) {
      if (error instanceof ApiError && error.status === 412) {
        throw new Error('Somebody has corrected tracks here meanwhile: close this and look again.');
      }
      throw error;
    }
    await client.invalidateQueries({ queryKey: ['corrections', analysis.id] });
    await client.invalidateQueries({ queryKey: ['analysis', analysis.id] });
  }

  if (!others.data || others.data.length === 0) return null;
  return (
    <Section id="carry" title="Corrections of other analyses of this recording">
      {problem ? <ErrorState live what={problem} /> : null}
      <Table label="Analyses of this recording with corrections, newest first">
        <thead>
          <tr>
            <HeadCell>Analysis</HeadCell>
            <HeadCell narrow="hide">Recipe</HeadCell>
            <HeadCell numeric>Corrections</HeadCell>
            <HeadCell>Carry them</HeadCell>
          </tr>
        </thead>
        <tbody>
          {others.data.map((one) => (
            <Row key={one.id}>
              <Cell>
                <Moment at={one.createdAt} />
              </Cell>
              <Cell quiet narrow="hide">
                {one.recipeName ?? 'unnamed recipe'}
              </Cell>
              <Cell numeric>{formatCount(one.correctionsRevision)}</Cell>
              <Cell>
                {reason ? null : (
                  <Button kind="bare" busy={busy === one.id} onClick={() => void ask(one)}>
                    See what can be carried
                  </Button>
                )}
              </Cell>
            </Row>
          ))}
        </tbody>
      </Table>
      {done ? (
        <div role="status" className="pt-3">
          <p className="text-note">{carryWords(done.report)}</p>
          {done.report.left.length > 0 ? <LeftTable left={done.report.left} /> : null}
        </div>
      ) : null}
      <ConfirmDialog
        open={asked !== null}
        onClose={() => setAsked(null)}
        question={
          asked && asked.report.carried === 0 ? 'There is nothing to carry' : 'Carry these corrections here?'
        }
        keep={asked && asked.report.carried === 0 ? 'Close' : 'Leave it'}
        act={asked ? `Carry ${formatCount(asked.report.carried)}` : 'Carry'}
        actable={asked !== null && asked.report.carried > 0}
        onAct={act}
      >
        {asked ? (
          <>
            <p>
              {carryWords(asked.report)} Each is matched to the tracks here by place and time, and becomes a
              correction of yours that can be taken back.
            </p>
            {asked.report.left.length > 0 ? (
              <div
                className="max-h-[40vh] overflow-y-auto"
                tabIndex={0}
                role="region"
                aria-label="Not carried"
              >
                <LeftTable left={asked.report.left} />
              </div>
            ) : null}
          </>
        ) : null}
      </ConfirmDialog>
    </Section>
  );
}
