'use client';

import Link from 'next/link';
import { useState } from 'react';
import { SeriesMark, seriesLook } from '@/components/charts/series-marks';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import type { ComparedRun } from '@/lib/views/compare-view';
import { LeaveOutDialog } from './leave-out-dialog';
import { RUN_COLUMNS } from './run-columns';

/** Columns beside the run that a window of 390 px has room for. */
const NARROW_MOST = 2;

interface CompareTableProps {
  runs: readonly ComparedRun[];
  /** Campaigns in the order of their marks. */
  campaigns: readonly string[];
  /** Keys of the columns that are shown. */
  columns: readonly string[];
  /** Left out where the order stands, as on paper. */
  sortBy?: (field: string) => { href: string; current: 'ascending' | 'descending' | null };
  mayLeaveOut: boolean;
  /** Without the last column, where something else says what is left out. */
  bare?: boolean;
}

/** All runs of the comparison with what was set and what was found. */
export function CompareTable({
  runs,
  campaigns,
  columns,
  sortBy,
  mayLeaveOut,
  bare = false,
}: CompareTableProps) {
  const [asked, setAsked] = useState<ComparedRun | null>(null);
  const chosen = RUN_COLUMNS.filter(({ key }) => columns.includes(key));
  const forNarrow = chosen.filter(({ narrow }) => narrow);
  // Runs alone would say nothing: where none of the columns is made for narrow windows, the first ones stand there.
  const onNarrow = new Set(forNarrow.length > 0 ? forNarrow : chosen.slice(0, NARROW_MOST));
  const shown = chosen.map((column) => ({
    ...column,
    hide: onNarrow.has(column) ? undefined : ('hide' as const),
  }));
  return (
    <>
      <Table label="Runs compared">
        <thead>
          <tr>
            <HeadCell sort={sortBy?.('campaign')}>Run</HeadCell>
            {shown.map(({ key, head, unit, numeric, hide, sort }) => (
              <HeadCell
                key={key}
                numeric={numeric}
                unit={unit}
                narrow={hide}
                sort={sort ? sortBy?.(key) : undefined}
              >
                {head}
              </HeadCell>
            ))}
            {bare ? null : <HeadCell narrow="hide">In the fit</HeadCell>}
          </tr>
        </thead>
        <tbody>
          {runs.map((run) => (
            <Row key={run.runId}>
              <Cell head className="min-w-[150px]">
                <span className="flex items-baseline gap-2">
                  <svg viewBox="-7 -7 14 14" aria-hidden="true" className="size-[13px] shrink-0 self-center">
                    <SeriesMark look={seriesLook(campaigns.indexOf(run.campaignId))} x={0} y={0} rPx={4.6} />
                  </svg>
                  <span>
                    <Link href={run.analysisId ? `/analyses/${run.analysisId}` : `/runs/${run.runId}`}>
                      {run.runName}
                    </Link>
                    <CellNote>{run.campaignName}</CellNote>
                  </span>
                </span>
              </Cell>
              {shown.map(({ key, numeric, hide, cell }) => (
                <Cell key={key} numeric={numeric} narrow={hide}>
                  {cell(run)}
                </Cell>
              ))}
              {bare ? null : (
                <Cell narrow="hide" quiet className="max-w-[220px] [overflow-wrap:anywhere]">
                  {run.leftOut ?? 'yes'}{' '}
                  {mayLeaveOut ? (
                    <button
                      type="button"
                      className="text-note underline decoration-violet underline-offset-[3px] hover:text-ink print:hidden"
                      aria-label={`${run.exclusion ? 'Take in again' : 'Leave out'}: ${run.runName}`}
                      onClick={() => setAsked(run)}
                    >
                      {run.exclusion ? 'take in again' : 'leave out'}
                    </button>
                  ) : null}
                </Cell>
              )}
            </Row>
          ))}
        </tbody>
      </Table>
      {asked ? <LeaveOutDialog run={asked} onClose={() => setAsked(null)} /> : null}
    </>
  );
}
