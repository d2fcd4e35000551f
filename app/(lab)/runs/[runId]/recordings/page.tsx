import type { Metadata } from 'next';
import { Suspense } from 'react';
import { may } from '@/auth/viewer';
import { RecordingTable } from '@/components/recordings/recording-table';
import { RoomLine } from '@/components/uploads/room-line';
import { UploadPanel } from '@/components/uploads/upload-panel';
import { PathThread } from '@/components/ui/path-thread';
import { Section, Sheet } from '@/components/ui/sheet';
import { countOf } from '@/lib/format/count';
import { quotaUse } from '@/models/queries/quota';
import { pathLevels } from '../../../path-levels';
import { loadRun } from '../load-run';
import { RunHead } from '../run-head';

interface Props {
  params: Promise<{ runId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Recordings of ${(await loadRun((await params).runId)).run.name}` };
}

export default async function RunRecordingsPage({ params }: Props) {
  const loaded = await loadRun((await params).runId);
  const { viewer, run, campaign } = loaded;
  return (
    <>
      <PathThread levels={pathLevels(viewer, { campaign, run })} />
      <Sheet>
        <RunHead loaded={loaded} tab="recordings" />
        {may(viewer, 'upload') ? (
          <div className="pt-4">
            <UploadPanel runId={run.id} />
            <RoomLine {...await quotaUse(viewer.labId)} />
          </div>
        ) : null}
        <Suspense>
          <Section title="Recordings" count={countOf(run.recordings, 'recording')}>
            <RecordingTable runId={run.id} />
          </Section>
        </Suspense>
      </Sheet>
    </>
  );
}
