import type { Metadata } from 'next';
import { requireViewer } from '@/auth/page';
import { RunForm } from '@/components/runs/run-form';
import { PathThread } from '@/components/ui/path-thread';
import { PageTitle } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { getCampaign } from '@/models/queries/campaigns';
import { found } from '../../../../found';
import { pathLevels } from '../../../../path-levels';
import { addRun } from '../../../../runs/actions';

export const metadata: Metadata = { title: 'New run' };

export default async function NewRunPage({ params }: { params: Promise<{ campaignId: string }> }) {
  const { campaignId } = await params;
  const viewer = await requireViewer('create-run', `/campaigns/${campaignId}/runs/new`);
  const campaign = await found(campaignId, (id) => getCampaign(viewer.labId, id));
  return (
    <>
      <PathThread
        levels={[
          ...pathLevels(viewer, { campaign }),
          { kind: 'Run', name: 'New run', href: `/campaigns/${campaignId}/runs/new` },
        ]}
      />
      <RunForm
        head={<PageTitle state={<StateWord state="waiting">not saved yet</StateWord>}>New run</PageTitle>}
        name=""
        notes=""
        tags={[]}
        conditions={{ drive: 'counterflow', flowDirection: null, gravityDirection: [0, 1] }}
        revision={null}
        save={addRun.bind(null, campaign.id)}
        submitLabel="Create run"
      />
    </>
  );
}
