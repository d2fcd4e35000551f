import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { mayTo, may } from '@/auth/viewer';
import { AnalysisTable } from '@/components/analyses/analysis-table';
import { CampaignDialog } from '@/components/campaigns/campaign-dialog';
import { RunTable } from '@/components/campaigns/run-table';
import { ButtonLink } from '@/components/ui/button';
import { Moment } from '@/components/ui/moment';
import { PathThread } from '@/components/ui/path-thread';
import { MarginNote } from '@/components/ui/margin-note';
import { Facts, PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { TagList } from '@/components/ui/tag-list';
import { countOf } from '@/lib/format/count';
import { getCampaign } from '@/models/queries/campaigns';
import { found } from '../../found';
import { pathLevels } from '../../path-levels';
import { editCampaign } from '../actions';

interface Props {
  params: Promise<{ campaignId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  const { campaignId } = await params;
  const viewer = await requireViewer('list-records', `/campaigns/${campaignId}`);
  return { title: (await found(campaignId, (id) => getCampaign(viewer.labId, id))).name };
}

export default async function CampaignPage({ params }: Props) {
  const { campaignId } = await params;
  const viewer = await requireViewer('list-records', `/campaigns/${campaignId}`);
  const campaign = await found(campaignId, (id) => getCampaign(viewer.labId, id));
  const makers = [campaign.createdBy?.id ?? null];
  const addRun = may(viewer, 'create-run') ? (
    <ButtonLink kind="main" href={`/campaigns/${campaignId}/runs/new`}>
      New run
    </ButtonLink>
  ) : null;
  const edit = mayTo(viewer, 'edit-campaign', makers) ? (
    <CampaignDialog
      label="Edit campaign"
      kind="outlined"
      title="Edit campaign"
      submitLabel="Save campaign"
      initial={campaign}
      save={editCampaign.bind(null, campaign.id, campaign.revision)}
    />
  ) : null;
  const report = may(viewer, 'compare') ? (
    <ButtonLink href={`/campaigns/${campaignId}/report`}>Report</ButtonLink>
  ) : null;
  const facts = [
    { name: 'Begun', value: <Moment at={campaign.createdAt} /> },
    { name: 'By', value: campaign.createdBy?.name ?? '' },
    {
      name: 'Holds',
      value: `${countOf(campaign.runs, 'run')}, ${countOf(campaign.recordings, 'recording')}`,
    },
  ];
  const notes = (
    <>
      <MarginNote title="This campaign">
        <Facts items={facts} />
      </MarginNote>
      {campaign.description ? (
        <MarginNote title="Description">
          <p className="whitespace-pre-wrap">{campaign.description}</p>
        </MarginNote>
      ) : null}
    </>
  );
  return (
    <>
      <PathThread
        levels={pathLevels(viewer, { campaign })}
        actions={
          edit || addRun || report ? (
            <>
              {report}
              {edit}
              {addRun}
            </>
          ) : null
        }
      />
      <Sheet margin={notes} marginLabel="About this campaign">
        <PageTitle
          state={<TagList tags={campaign.tags} href={(tag) => `/campaigns?tag=${encodeURIComponent(tag)}`} />}
        >
          {campaign.name}
        </PageTitle>
        <Suspense>
          <Section title="Runs" count={countOf(campaign.runs, 'run')}>
            <RunTable campaignId={campaign.id} />
          </Section>
        </Suspense>
        {may(viewer, 'see-data') ? (
          <Suspense>
            <Section title="Analyses" count="of all runs, newest first">
              <AnalysisTable
                source={`/api/v1/analyses?campaign=${campaign.id}`}
                empty="No recording of this campaign has been analysed yet."
              />
            </Section>
          </Suspense>
        ) : null}
      </Sheet>
    </>
  );
}
