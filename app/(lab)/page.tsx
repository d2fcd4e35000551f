import type { Metadata } from 'next';
import Link from 'next/link';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { CampaignDialog } from '@/components/campaigns/campaign-dialog';
import { ArrivingTable } from '@/components/overview/arriving-table';
import { OverviewSentence } from '@/components/overview/overview-sentence';
import { ResultTable } from '@/components/overview/result-table';
import { WorkList } from '@/components/overview/work-list';
import { MarginNote } from '@/components/ui/margin-note';
import { PathThread } from '@/components/ui/path-thread';
import { Lede, Section, Sheet } from '@/components/ui/sheet';
import { ROLE_NAMES } from '@/lib/access';
import { formatBytes } from '@/lib/format/bytes';
import { countOf } from '@/lib/format/count';
import { labOverview } from '@/models/queries/overview';
import { labStorage } from '@/models/queries/storage';
import { addCampaign } from './campaigns/actions';
import { pathLevels } from './path-levels';
import { reviewWaits } from './review/waiting';

export const metadata: Metadata = { title: 'Overview' };

export default async function OverviewPage() {
  const viewer = await requireViewer('own-account', '/');
  const seesData = may(viewer, 'see-data');
  const [overview, storage] = await Promise.all([
    labOverview(viewer.labId, viewer.userId),
    may(viewer, 'see-storage') ? labStorage(viewer.labId) : null,
  ]);
  const { counts } = overview;
  const waits = await reviewWaits(viewer.labId, viewer.userId);
  const review = {
    waiting: may(viewer, 'review') ? waits.waiting : 0,
    disagreed: may(viewer, 'settle') ? waits.disagreed : 0,
  };
  const margin = (
    <>
      <MarginNote title="You here">
        {viewer.roles.map((role) => ROLE_NAMES[role]).join(', ')} of {viewer.lab.name}.
      </MarginNote>
      {counts.refused > 0 ? (
        <MarginNote tone="warning" title={`${countOf(counts.refused, 'stack was', 'stacks were')} refused`}>
          Each says on its page what is wrong with it and what can still be used.
        </MarginNote>
      ) : null}
      {storage && storage.checks.notIntact > 0 ? (
        <MarginNote
          tone="caution"
          title={`${countOf(storage.checks.notIntact, 'stored stack is', 'stored stacks are')} damaged`}
        >
          The bytes on disk are not those that were sent. <Link href="/lab/storage">See which</Link>
        </MarginNote>
      ) : null}
      {storage ? (
        <MarginNote title="Store">
          {countOf(storage.recordings, 'recording')}, {formatBytes(storage.bytes)}
          {storage.freeBytes === null ? '' : `; ${formatBytes(storage.freeBytes)} free`}.{' '}
          <Link href="/lab/storage">See the store</Link>
        </MarginNote>
      ) : null}
      {may(viewer, 'manage-people') ? (
        <MarginNote title="People">
          {countOf(counts.members, 'member')}. <Link href="/lab">See people and roles</Link>
        </MarginNote>
      ) : null}
    </>
  );
  const actions = may(viewer, 'create-campaign') ? (
    <CampaignDialog
      label="New campaign"
      kind={counts.campaigns === 0 ? 'main' : 'outlined'}
      title="New campaign"
      submitLabel="Create campaign"
      save={addCampaign}
    />
  ) : null;
  return (
    <>
      <PathThread levels={pathLevels(viewer)} actions={actions} />
      <Sheet margin={margin} marginLabel="Notes">
        <h1 className="sr-only">Overview</h1>
        <Lede>
          <OverviewSentence
            name={viewer.name}
            overview={overview}
            seesData={seesData}
            review={review}
            signs={may(viewer, 'sign-off')}
          />
        </Lede>
        {overview.arriving.length > 0 ? (
          <Section id="uploads" title="Uploads to finish" count={countOf(overview.arriving.length, 'stack')}>
            <ArrivingTable stacks={overview.arriving} />
          </Section>
        ) : null}
        {seesData ? (
          <Section
            id="analyses"
            title="Analyses"
            count="at work, waiting, failed"
            more={{ href: '/analyses', label: 'All analyses' }}
          >
            <WorkList />
          </Section>
        ) : null}
        {seesData ? (
          <Section title="New results" count="newest first">
            <ResultTable results={overview.results} />
          </Section>
        ) : null}
      </Sheet>
    </>
  );
}
