'use client';

import Link from 'next/link';
import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { NO_FILTER, offered, type ExportableAnalysis, type OfferFilter } from '@/lib/exports/exportable';
import { countOf, formatCount } from '@/lib/format/count';
import { quantityText } from '@/lib/format/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import { parseNumber } from '@/lib/run-form/parse-number';

interface ChooseAnalysesProps {
  analyses: readonly ExportableAnalysis[];
  chosen: ReadonlySet<string>;
  onChoose: (chosen: ReadonlySet<string>) => void;
  firstCampaignId: string;
}

const SIGNED = [
  { value: '', label: 'signed off or not' },
  { value: 'yes', label: 'signed off' },
  { value: 'no', label: 'not signed off' },
];

/** Finished analyses, narrowed by campaign, temperature and sign-off, with a mark for each that goes in. */
export function ChooseAnalyses({ analyses, chosen, onChoose, firstCampaignId }: ChooseAnalysesProps) {
  const [filter, setFilter] = useState<OfferFilter>({ ...NO_FILTER, campaignId: firstCampaignId });
  const shown = offered(analyses, filter);
  const campaigns = [...new Map(analyses.map((one) => [one.campaignId, one.campaign]))];
  const change = (part: Partial<OfferFilter>) => setFilter({ ...filter, ...part });
  const toggle = (ids: readonly string[], on: boolean) => {
    const next = new Set(chosen);
    for (const id of ids) if (on) next.add(id); else next.delete(id); // prettier-ignore
    onChoose(next);
  };
  const bound = (text: string) => {
    const value = parseNumber(text);
    return typeof value === 'number' && Number.isFinite(value) ? value : null;
  };
  if (analyses.length === 0) {
    return <EmptyState>No analysis has finished yet. Packages are made of finished ones.</EmptyState>;
  }
  const all = shown.every(({ id }) => chosen.has(id));
  return (
    <>
      <div className="grid grid-cols-2 items-end gap-3 py-2 hand:grid-cols-[minmax(0,2fr)_minmax(0,1.4fr)_110px_110px_auto]">
        <SelectField
          label="Campaign"
          value={filter.campaignId}
          onChange={({ target }) => change({ campaignId: target.value })}
          options={[
            { value: '', label: 'all campaigns' },
            ...campaigns.map(([value, label]) => ({ value, label })),
          ]}
        />
        <SelectField
          label="Sign-off"
          value={filter.signedOff}
          onChange={({ target }) => change({ signedOff: target.value as OfferFilter['signedOff'] })}
          options={SIGNED}
        />
        <Field
          label="From"
          unit="K"
          inputMode="decimal"
          onChange={({ target }) => change({ temperatureFrom: bound(target.value) })}
        />
        <Field
          label="To"
          unit="K"
          inputMode="decimal"
          onChange={({ target }) => change({ temperatureTo: bound(target.value) })}
        />
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
      {shown.length === 0 ? (
        <EmptyState>No finished analysis is like this.</EmptyState>
      ) : (
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
      )}
    </>
  );
}
