import type { Metadata } from 'next';
import { may } from '@/auth/viewer';
import { viewedRecording } from '@/components/canvas/viewed-recording';
import { TrySheet } from '@/components/try-out/try-sheet';
import { ButtonLink } from '@/components/ui/button';
import { EmptyState, NoPermission } from '@/components/ui/page-states';
import { PathThread } from '@/components/ui/path-thread';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { whoMay } from '@/lib/access';
import { pathLevels } from '../../../path-levels';
import { loadRecording, missingConditions } from '../load-recording';

interface Props {
  params: Promise<{ recordingId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: `Try-out on ${(await loadRecording((await params).recordingId)).recording.name}` };
}

export default async function TryOutPage({ params }: Props) {
  const { viewer, recording, run, campaign } = await loadRecording((await params).recordingId);
  const viewed = viewedRecording(recording, run.frameInterval_s ?? null);
  const back = `/recordings/${recording.id}`;
  return (
    <>
      <PathThread levels={pathLevels(viewer, { campaign, run, recording, rehearsal: recording.rehearsal })} />
      <Sheet>
        <PageTitle
          aside={
            <ButtonLink href={back} kind="bare">
              Back to the recording
            </ButtonLink>
          }
        >
          Try-out on {recording.name}
        </PageTitle>
        {!may(viewer, 'try-recipe') ? (
          <NoPermission>{`A recipe can be tried by: ${whoMay('try-recipe')}.`}</NoPermission>
        ) : viewed ? (
          <TrySheet recording={viewed} startReason={missingConditions(run)?.sentence ?? null} />
        ) : (
          <EmptyState action={<ButtonLink href={back}>See its state</ButtonLink>}>
            A recipe can be tried once the stack has been checked.
          </EmptyState>
        )}
      </Sheet>
    </>
  );
}
