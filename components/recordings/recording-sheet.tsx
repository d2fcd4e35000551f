'use client';

import { AnalysisTable } from '@/components/analyses/analysis-table';
import { useViewerStore } from '@/components/canvas/use-viewer';
import { viewedRecording } from '@/components/canvas/viewed-recording';
import { ViewerPanel, type ViewedRecording } from '@/components/canvas/viewer-panel';
import { useRecording } from '@/components/data/use-recording';
import { RehearsalLine } from '@/components/rehearsals/rehearsal-mark';
import { ButtonLink } from '@/components/ui/button';
import { MarginNote } from '@/components/ui/margin-note';
import { Moment } from '@/components/ui/moment';
import { NoPermission, StaleLine } from '@/components/ui/page-states';
import { ProgressThread } from '@/components/ui/progress-thread';
import { PageTitle, Section, Sheet } from '@/components/ui/sheet';
import { StateWord, type BeadState } from '@/components/ui/state-bead';
import { filledBeads } from '@/components/ui/thread-beads';
import { recordingWords } from '@/lib/recording-words';
import type { RecordingView } from '@/lib/views/recording-view';
import { QualityNotes } from './quality-notes';
import { RefusalPanel } from './refusal-panel';
import { StartAnalysis } from './start-analysis';

interface RecordingSheetProps {
  initial: RecordingView;
  frameIntervalS: number | null;
  conditions: string;
  missing: { sentence: string; href: string } | null;
  rights: {
    /** False: the pictures and what was made of them stay closed. */
    seeData: boolean;
    start: boolean;
    /** Why this person can't decide about a refused stack; null when they can. */
    editReason: string | null;
    seeReason: string | null;
  };
}

const GLYPHS: Record<RecordingView['state'], BeadState> = {
  arriving: 'running',
  checking: 'running',
  ready: 'done',
  refused: 'failed',
};

/** A recording: its frames, how good they are, and the analyses made of it. */
export function RecordingSheet({
  initial,
  frameIntervalS,
  conditions,
  missing,
  rights,
}: RecordingSheetProps) {
  const query = useRecording(initial.id, initial);
  const recording = query.data ?? initial;
  const viewed = viewedRecording(recording, frameIntervalS);
  const { state, warnings } = recording;
  return (
    <Sheet
      marginLabel="Image quality and warnings"
      margin={
        <>
          {recording.damage ? (
            <MarginNote tone="caution" title="The stored original is damaged">
              Seen <Moment at={recording.damage.since} />. {recording.damage.detail} Results made before are
              kept. Restore the file from a backup, or send the stack again.
            </MarginNote>
          ) : null}
          {warnings.map(({ code, detail }) => (
            <MarginNote key={code} title={WARNING_TITLES[code] ?? 'Look at this'} tone="warning">
              {detail}
            </MarginNote>
          ))}
          {state === 'ready' ? <QualityNotes recording={recording} /> : null}
        </>
      }
    >
      <PageTitle
        state={
          <StateWord state={GLYPHS[state]}>
            {state === 'ready' ? 'ready' : recordingWords(recording)}
          </StateWord>
        }
        aside={<span className="text-note">{conditions}</span>}
      >
        {recording.name}
      </PageTitle>
      <RehearsalLine rehearsal={recording.rehearsal} />
      {query.isError ? (
        <StaleLine what="This may be out of date.">{query.error.message} It is asked for again.</StaleLine>
      ) : null}
      {state === 'arriving' ? <Arriving recording={recording} /> : null}
      {state === 'checking' ? <Checking recording={recording} /> : null}
      {state === 'refused' ? <RefusalPanel recording={recording} editReason={rights.editReason} /> : null}
      {viewed && rights.seeData ? <Frames recording={viewed} /> : null}
      {rights.seeReason ? <NoPermission>{rights.seeReason}</NoPermission> : null}
      {viewed && rights.start ? <StartAnalysis recordingId={recording.id} missing={missing} /> : null}
      {rights.seeData ? (
        <Section title="Analyses">
          <AnalysisTable
            source={`/api/v1/recordings/${recording.id}/analyses`}
            empty={
              state === 'ready'
                ? 'No analyses of this recording yet.'
                : 'Analyses can be made once the stack is ready.'
            }
          />
        </Section>
      ) : null}
    </Sheet>
  );
}

function Frames({ recording }: { recording: ViewedRecording }) {
  const store = useViewerStore(recording.frames, recording);
  return <ViewerPanel store={store} recording={recording} contrastOpen />;
}

const BEADS = 20;

function Arriving({ recording }: { recording: RecordingView }) {
  const { bytes, receivedBytes, runId } = recording;
  const words = recordingWords(recording);
  return (
    <div className="flex flex-wrap items-center gap-x-5 gap-y-2 border-y border-line py-3">
      <ProgressThread
        stages={[{ beads: BEADS, filled: filledBeads(receivedBytes / bytes, BEADS) }]}
        label={words}
      />
      <p aria-live="polite" className="text-note tabular-nums text-ink-2">
        {words}. What has arrived is kept.
      </p>
      <span className="ml-auto">
        <ButtonLink href={`/runs/${runId}/recordings`}>Continue the upload</ButtonLink>
      </span>
    </div>
  );
}

function Checking({ recording }: { recording: RecordingView }) {
  const words = `${Math.floor(recording.checkProgress * 100)} % checked`;
  return (
    <div className="flex flex-wrap items-center gap-x-5 gap-y-2 border-y border-line py-3">
      <ProgressThread
        stages={[{ beads: BEADS, filled: filledBeads(Math.max(recording.checkProgress, 0.01), BEADS) }]}
        label={words}
      />
      <p aria-live="polite" className="text-note tabular-nums text-ink-2">
        {words}. Every page is read, previews and image quality are made. You can leave this page.
      </p>
    </div>
  );
}

const WARNING_TITLES: Record<string, string> = {
  NONFINITE_PIXELS: 'Pixels without a number',
  NO_SIGNAL: 'Nothing to see',
  OME_INVALID: 'Embedded metadata unreadable',
  FRAME_GAP: 'Frames are missing',
  STACK_TRUNCATED: 'Part of the stack is used',
  CHECKSUM: 'Checksums differ',
};
