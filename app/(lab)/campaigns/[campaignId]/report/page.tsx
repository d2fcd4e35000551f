import type { Metadata } from 'next';
import { requireViewer } from '@/auth/page';
import { PrintButton } from '@/components/report/print-button';
import { ReportSheet } from '@/components/report/report-sheet';
import { ButtonLink } from '@/components/ui/button';
import { PathThread } from '@/components/ui/path-thread';
import { reportCautions } from '@/lib/report/cautions';
import { reportedEvents } from '@/lib/report/events';
import { campaignReport } from '@/models/queries/campaign-report';
import { getCampaign } from '@/models/queries/campaigns';
import { found } from '../../../found';
import { pathLevels } from '../../../path-levels';
import { stripStates } from './strip-states';

interface Props {
  params: Promise<{ campaignId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  const { campaignId } = await params;
  const viewer = await requireViewer('compare', `/campaigns/${campaignId}/report`);
  return { title: `Report: ${(await found(campaignId, (id) => getCampaign(viewer.labId, id))).name}` };
}

export default async function CampaignReportPage({ params }: Props) {
  const { campaignId } = await params;
  const viewer = await requireViewer('compare', `/campaigns/${campaignId}/report`);
  const campaign = await found(campaignId, (id) => getCampaign(viewer.labId, id));
  const { comparison, runs, analyses, events } = await campaignReport(viewer.labId, campaign.id);
  const picked = reportedEvents(events, analyses);
  const strips = await stripStates(viewer.labId, picked);
  return (
    <>
      <PathThread
        levels={pathLevels(viewer, { campaign })}
        actions={
          <>
            <ButtonLink href={`/exports?campaigns=${campaign.id}`}>Data package</ButtonLink>
            <PrintButton />
          </>
        }
      />
      <ReportSheet
        laboratory={viewer.lab.name}
        campaign={campaign}
        comparison={comparison}
        conditions={runs.map(({ id, name, conditions }) => ({ id, name, conditions }))}
        events={picked.map((one) => ({ ...one, strip: strips.get(one.id) ?? 'none' }))}
        cautions={reportCautions(comparison, runs, analyses)}
        safety={[...new Set(runs.flatMap(({ safety }) => safety))]}
        origins={analyses.map(
          ({ runName, recording, sha256, recipeName, codeVersion, corrections, contentHash }) => ({ runName, recording, sha256, recipeName, codeVersion, corrections, contentHash }), // prettier-ignore
        )}
        at={new Date().toISOString()}
      />
    </>
  );
}
