import type { Metadata } from 'next';
import { cache } from 'react';
import { requireViewer } from '@/auth/page';
import { may, mayTo } from '@/auth/viewer';
import { RehearsalSheet } from '@/components/rehearsals/rehearsal-sheet';
import { PathThread } from '@/components/ui/path-thread';
import { whoMay } from '@/lib/access';
import { getRehearsalResult } from '@/models/queries/rehearsals';
import { found } from '../../found';
import { pathLevels } from '../../path-levels';

interface Props {
  params: Promise<{ rehearsalId: string }>;
}

const load = cache(async (rehearsalId: string) => {
  const viewer = await requireViewer('see-data', `/rehearsals/${rehearsalId}`);
  const rehearsal = await found(rehearsalId, (id) => getRehearsalResult(viewer.labId, id));
  return { viewer, rehearsal };
});

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Rehearsal: ${(await load((await params).rehearsalId)).rehearsal.name}` };
}

export default async function RehearsalPage({ params }: Props) {
  const { viewer, rehearsal } = await load((await params).rehearsalId);
  const makers = [rehearsal.createdBy?.id ?? null];
  return (
    <>
      <PathThread levels={pathLevels(viewer, { rehearsal })} />
      <RehearsalSheet
        initial={rehearsal}
        rights={{
          make: may(viewer, 'make-rehearsal'),
          remove: mayTo(viewer, 'remove-rehearsal', makers),
          stopReason: mayTo(viewer, 'stop-analysis', makers) ? null : `It can be stopped by: ${whoMay('stop-analysis')}.`, // prettier-ignore
        }}
      />
    </>
  );
}
