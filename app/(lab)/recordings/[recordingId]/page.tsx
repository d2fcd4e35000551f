import type { Metadata } from 'next';
import { Suspense } from 'react';
import { may, mayTo } from '@/auth/viewer';
import { RecordingSheet } from '@/components/recordings/recording-sheet';
import { PathThread } from '@/components/ui/path-thread';
import { whoMay } from '@/lib/access';
import { conditionsWords } from '@/lib/conditions-words';
import { pathLevels } from '../../path-levels';
import { loadRecording, missingConditions } from './load-recording';

interface Props {
  params: Promise<{ recordingId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: (await loadRecording((await params).recordingId)).recording.name };
}

export default async function RecordingPage({ params }: Props) {
  const { viewer, recording, run, campaign } = await loadRecording((await params).recordingId);
  const makers = [recording.createdBy?.id ?? null, run.createdBy?.id ?? null];
  const seeData = may(viewer, 'see-data');
  return (
    <>
      <PathThread levels={pathLevels(viewer, { campaign, run, recording, rehearsal: recording.rehearsal })} />
      <Suspense>
        <RecordingSheet
          initial={recording}
          frameIntervalS={run.frameInterval_s ?? null}
          conditions={conditionsWords(run)}
          missing={missingConditions(run)}
          rights={{
            seeData,
            start: may(viewer, 'start-analysis'),
            editReason: mayTo(viewer, 'edit-recording', makers)
              ? null
              : `What to use of it can be chosen by whoever sent it: ${whoMay('edit-recording')}.`,
            seeReason: seeData ? null : `The frames can be seen by: ${whoMay('see-data')}.`,
          }}
        />
      </Suspense>
    </>
  );
}
