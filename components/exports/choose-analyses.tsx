'use client';

import Link from 'next/link';
import { Button } from '@/components/ui/button';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import type { ExportableAnalysis } from '@/lib/exports/exportable';
import { countOf, formatCount } from '@/lib/format/count';
import { quantityText } from '@/lib/format/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';

interface ChooseAnalysesProps {
  analyses: readonly ExportableAnalysis[];
  chosen: ReadonlySet<string>;
  onChoose: (chosen: ReadonlySet<string>) => void;
  /** Whether a selection left something out. */
  narrowed: boolean;
}

/** Finished analyses of a selection, with a mark for each that goes in; what was marked stays so when the selection changes. */
export function ChooseAnalyses({ analyses: shown, chosen, onChoose, narrowed }: ChooseAnalysesProps) {
  const toggle = (ids: readonly string[], on: boolean) => {
    const next = new Set(chosen);
    for (const id of ids) if (on) next.add(id); else next.delete(id); // prettier-ignore
    onChoose(next);
  };
  if (shown.length === 0) {
    return (
      <EmptyState>
        {narrowed
          ? 'No finished analysis fits this selection.'
          : 'No analysis has finished yet. Packages are made of finished ones.'}
      </EmptyState>
    );
  }
  const all = shown.every(({ id }) => chosen.has(id));
  return (
    <>
      <div className="py-2">
        <Button
          onClick={() =>
            toggle(
              shown.map(({ id }) => id),
              !all,
            )
          }
          disabled={shown.length === 0}
        >
          {all && shown.length > 0 ? 'Choose none' : `Choose ${countOf(shown.length, 'shown', 'shown')}`}
        </Button>
      </div>
      <div
        className="max-h-[420px] overflow-y-auto"
        tabIndex={0}
        role="region"
        aria-label="Analyses to choose from"
      >
        <Table label="Analyses to choose from" density="dense">
          <thead>
            <tr>
              <HeadCell silent>In the package</HeadCell>
              <HeadCell>Recording</HeadCell>
              <HeadCell narrow="hide">Campaign and run</HeadCell>
              <HeadCell numeric narrow="hide" unit="K">
                T
              </HeadCell>
              <HeadCell numeric narrow="hide" unit="mW/cm^2">
                q
              </HeadCell>
              <HeadCell numeric narrow="hide">
                Tracks
              </HeadCell>
              <HeadCell narrow="hide">Finished</HeadCell>
            </tr>
          </thead>
          <tbody>
            {shown.map((one) => (
              <Row key={one.id}>
                <Cell className="w-8">
                  <label className="flex size-6 cursor-pointer items-center justify-center">
                    <input
                      type="checkbox"
                      checked={chosen.has(one.id)}
                      onChange={({ target }) => toggle([one.id], target.checked)}
                      aria-label={`${one.recording}, ${one.run}`}
                      className="size-[14px] accent-ink"
                    />
                  </label>
                </Cell>
                <Cell head>
                  <Link href={`/analyses/${one.id}`} className="[overflow-wrap:anywhere]">
                    {one.recording}
                  </Link>
                  {one.signedOff ? <CellNote>signed off</CellNote> : null}
                  {one.rehearsal ? <CellNote>rehearsal, no measurement</CellNote> : null}
                </Cell>
                <Cell narrow="hide">
                  {one.campaign}, {one.run}
                </Cell>
                <Cell numeric narrow="hide">
                  {one.temperatureK === null ? '' : quantityText({ value: one.temperatureK, digits: 3 })}
                </Cell>
                <Cell numeric narrow="hide">
                  {one.heatFluxWM2 === null
                    ? ''
                    : quantityText({
                        value: one.heatFluxWM2,
                        siPerUnit: DISPLAY_UNITS.heatFlux.siPerUnit,
                        digits: 3,
                      })}
                </Cell>
                <Cell numeric narrow="hide">
                  {formatCount(one.tracks)}
                </Cell>
                <Cell quiet narrow="hide">
                  {one.finishedAt ? <Moment at={one.finishedAt} /> : null}
                </Cell>
              </Row>
            ))}
          </tbody>
        </Table>
      </div>
    </>
  );
}
