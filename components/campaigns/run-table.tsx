'use client';

import Link from 'next/link';
import { Answer } from '@/components/data/answer';
import { SearchField } from '@/components/lists/search-field';
import { useList } from '@/components/lists/use-list';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { Quantity } from '@/components/ui/quantity';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { TagList } from '@/components/ui/tag-list';
import { formatCount } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import { DRIVE_NAMES } from '@/lib/run-form/drive-names';
import type { ListShape } from '@/lib/lists/list-state';
import type { RunView } from '@/lib/views/run-view';

const SHAPE: ListShape = {
  sorts: ['name', 'createdAt', 'temperature_K', 'heatFlux_W_m2'],
  defaultSort: 'createdAt',
  filters: ['q', 'tag'],
};
const { heatFlux, velocity, lineDensity } = DISPLAY_UNITS;

/** Runs of a campaign with their conditions and what has been measured. */
export function RunTable({ campaignId, action }: { campaignId: string; action?: React.ReactNode }) {
  const list = useList<RunView>(`/api/v1/campaigns/${campaignId}/runs`, SHAPE);
  const filtered = Object.keys(list.state.filters).length > 0;
  return (
    <>
      <div className="pb-1">
        <SearchField
          label="Search runs"
          value={list.state.filters.q ?? ''}
          onSearch={(q) => list.filter('q', q)}
        />
      </div>
      <Answer query={list.query} what="the runs">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState action={filtered ? undefined : action}>
              {filtered ? 'No run fits these words.' : 'No runs yet. A run is one set of conditions.'}
            </EmptyState>
          ) : (
            <Table label="Runs">
              <thead>
                <tr>
                  <HeadCell sort={list.sort('name')}>Run</HeadCell>
                  <HeadCell numeric unit="K" sort={list.sort('temperature_K')}>
                    T
                  </HeadCell>
                  <HeadCell narrow="hide">Drive</HeadCell>
                  <HeadCell numeric narrow="hide" unit={heatFlux.unit} sort={list.sort('heatFlux_W_m2')}>
                    Heat flux
                  </HeadCell>
                  <HeadCell numeric narrow="hide" unit={velocity.unit}>
                    <i className="font-serif">v</i>
                    <sub className="font-serif">ns</sub>
                  </HeadCell>
                  <HeadCell numeric narrow="hide">
                    Recordings
                  </HeadCell>
                  <HeadCell numeric narrow="hide">
                    Tracks
                  </HeadCell>
                  <HeadCell numeric unit={`${lineDensity.unit}, 95 %`}>
                    Line density <i className="font-serif">L</i>
                  </HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((run) => (
                  <RunRow key={run.id} run={run} />
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="runs" backHref={list.backHref} nextHref={list.nextHref} />
    </>
  );
}

function RunRow({ run }: { run: RunView }) {
  const { headline } = run;
  const density = headline?.lineDensity_m2 ?? null;
  return (
    <Row>
      <Cell head>
        <Link href={`/runs/${run.id}`}>{run.name}</Link>
        <TagList tags={run.tags} />
      </Cell>
      <Cell numeric>
        <Quantity value={run.temperature_K} digits={4} />
      </Cell>
      <Cell narrow="hide">{run.drive ? DRIVE_NAMES[run.drive] : ''}</Cell>
      <Cell numeric narrow="hide">
        <Quantity value={run.heatFlux_W_m2} siPerUnit={heatFlux.siPerUnit} />
      </Cell>
      <Cell numeric narrow="hide">
        <Quantity value={run.derived.vns_m_s} siPerUnit={velocity.siPerUnit} />
      </Cell>
      <Cell numeric narrow="hide">
        {formatCount(run.recordings)}
      </Cell>
      <Cell numeric narrow="hide">
        {headline ? (
          <Link href={`/analyses/${headline.analysisId}`}>{formatCount(headline.tracks)}</Link>
        ) : null}
      </Cell>
      <Cell numeric>
        {density ? (
          <Quantity {...density} siPerUnit={lineDensity.siPerUnit} />
        ) : (
          <span className="text-ink-3">{headline ? 'no combined value' : ''}</span>
        )}
      </Cell>
    </Row>
  );
}
