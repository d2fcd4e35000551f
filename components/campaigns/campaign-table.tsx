'use client';

import Link from 'next/link';
import { Answer } from '@/components/data/answer';
import { SearchField } from '@/components/lists/search-field';
import { useList } from '@/components/lists/use-list';
import { Moment } from '@/components/ui/moment';
import { EmptyState } from '@/components/ui/page-states';
import { Pager } from '@/components/ui/pager';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { TagList } from '@/components/ui/tag-list';
import { countOf, formatCount } from '@/lib/format/count';
import type { ListShape } from '@/lib/lists/list-state';
import type { CampaignView } from '@/lib/views/campaign-view';

const SHAPE: ListShape = { sorts: ['name', 'createdAt'], defaultSort: '-createdAt', filters: ['q', 'tag'] };

/** Campaigns of the laboratory, by the order and filters in the address. */
export function CampaignTable({ action }: { action?: React.ReactNode }) {
  const list = useList<CampaignView>('/api/v1/campaigns', SHAPE);
  const filtered = Object.keys(list.state.filters).length > 0;
  return (
    <>
      <div className="flex flex-wrap items-center gap-3 pb-2">
        <SearchField
          label="Search campaigns"
          value={list.state.filters.q ?? ''}
          onSearch={(q) => list.filter('q', q)}
        />
        {list.state.filters.tag ? (
          <button
            type="button"
            className="min-h-6 text-note underline"
            onClick={() => list.filter('tag', '')}
          >
            only “{list.state.filters.tag}”: show all
          </button>
        ) : null}
      </div>
      <Answer query={list.query} what="the campaigns">
        {({ items }) =>
          items.length === 0 ? (
            <EmptyState action={filtered ? undefined : action}>
              {filtered
                ? 'No campaign fits these words.'
                : 'No campaigns yet. A campaign holds the runs of one cooldown.'}
            </EmptyState>
          ) : (
            <Table label="Campaigns">
              <thead>
                <tr>
                  <HeadCell sort={list.sort('name')}>Campaign</HeadCell>
                  <HeadCell numeric>Runs</HeadCell>
                  <HeadCell numeric narrow="hide">
                    Recordings
                  </HeadCell>
                  <HeadCell>Analyses</HeadCell>
                  <HeadCell narrow="hide" sort={list.sort('createdAt')}>
                    Begun
                  </HeadCell>
                </tr>
              </thead>
              <tbody>
                {items.map((campaign) => (
                  <CampaignRow
                    key={campaign.id}
                    campaign={campaign}
                    tagHref={(tag) => `/campaigns?tag=${encodeURIComponent(tag)}`}
                  />
                ))}
              </tbody>
            </Table>
          )
        }
      </Answer>
      <Pager label="campaigns" backHref={list.backHref} nextHref={list.nextHref} />
    </>
  );
}

function CampaignRow({ campaign, tagHref }: { campaign: CampaignView; tagHref: (tag: string) => string }) {
  const { analyses } = campaign;
  return (
    <Row>
      <Cell head>
        <Link href={`/campaigns/${campaign.id}`}>{campaign.name}</Link>
        <TagList tags={campaign.tags} href={tagHref} />
      </Cell>
      <Cell numeric>{formatCount(campaign.runs)}</Cell>
      <Cell numeric narrow="hide">
        {formatCount(campaign.recordings)}
      </Cell>
      <Cell>
        <AnalysisCounts {...analyses} />
      </Cell>
      <Cell quiet narrow="hide">
        <Moment at={campaign.createdAt} />
        {campaign.createdBy ? (
          <span className="block text-small text-ink-3">{campaign.createdBy.name}</span>
        ) : null}
      </Cell>
    </Row>
  );
}

function AnalysisCounts({ running, done, failed }: CampaignView['analyses']) {
  if (running + done + failed === 0) return <span className="text-ink-3">none</span>;
  return (
    <span className="flex flex-wrap gap-x-4">
      {running > 0 ? <StateWord state="running">{running} at work</StateWord> : null}
      {failed > 0 ? <StateWord state="failed">{failed} failed</StateWord> : null}
      {done > 0 ? <StateWord state="done">{countOf(done, 'done', 'done')}</StateWord> : null}
    </span>
  );
}
