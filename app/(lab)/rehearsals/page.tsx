import type { Metadata } from 'next';
import { Suspense } from 'react';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { RehearsalTable } from '@/components/rehearsals/rehearsal-table';
import { ButtonLink } from '@/components/ui/button';
import { MarginNote } from '@/components/ui/margin-note';
import { PathThread } from '@/components/ui/path-thread';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { whoMay } from '@/lib/access';
import { pathLevels } from '../path-levels';

export const metadata: Metadata = { title: 'Rehearsals' };

export default async function RehearsalsPage() {
  const viewer = await requireViewer('see-data', '/rehearsals');
  const makes = may(viewer, 'make-rehearsal');
  const action = makes ? (
    <ButtonLink href="/rehearsals/new" kind="main">
      New rehearsal
    </ButtonLink>
  ) : null;
  return (
    <>
      <PathThread levels={pathLevels(viewer)} actions={action} />
      <Sheet
        margin={
          <>
            <MarginNote title="What a rehearsal is">
              A recording whose truth is known: simulated from planned conditions, or particles planted in the
              frames of a real one. It goes through the ordinary analysis, and what comes out is compared with
              what went in.
            </MarginNote>
            <MarginNote title="Kept apart">
              Rehearsals are marked wherever they show, and take no part in the laboratory’s results and
              comparisons. Their stacks take room in the store.
            </MarginNote>
            {makes ? null : (
              <MarginNote title="Who makes them">
                Rehearsals are made by: {whoMay('make-rehearsal')}.
              </MarginNote>
            )}
          </>
        }
      >
        <PageTitle>Rehearsals</PageTitle>
        <Suspense>
          <RehearsalTable action={action} />
        </Suspense>
      </Sheet>
    </>
  );
}
