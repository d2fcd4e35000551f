import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { CampaignDialog } from '@/components/campaigns/campaign-dialog';
import { CampaignTable } from '@/components/campaigns/campaign-table';
import { PathThread } from '@/components/ui/path-thread';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { pathLevels } from '../path-levels';
import { addCampaign } from './actions';

export const metadata: Metadata = { title: 'Campaigns' };

export default async function CampaignsPage() {
  const viewer = await requireViewer('list-records', '/campaigns');
  const add = may(viewer, 'create-campaign') ? (
    <CampaignDialog
      label="New campaign"
      title="New campaign"
      submitLabel="Create campaign"
      save={addCampaign}
    />
  ) : null;
  return (
    <>
      <PathThread levels={pathLevels(viewer)} actions={add} />
      <Sheet>
        <PageTitle>Campaigns</PageTitle>
        <Suspense>
          <CampaignTable />
        </Suspense>
      </Sheet>
    </>
  );
}
