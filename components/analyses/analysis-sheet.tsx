'use client';

import { useState } from 'react';
import { HereToo } from '@/components/corrections/here-too';
import { StandingSection } from '@/components/corrections/standing-section';
import { SpotsPlot } from '@/components/charts/spots-plot';
import { TrackViewer } from '@/components/canvas/track-viewer';
import { useViewer, useViewerStore } from '@/components/canvas/use-viewer';
import type { ViewedRecording } from '@/components/canvas/viewer-panel';
import { Answer } from '@/components/data/answer';
import { useCandidates } from '@/components/data/use-candidates';
import { useMeasures } from '@/components/data/use-measures';
import { useProgress } from '@/components/data/use-progress';
import { RehearsalLine } from '@/components/rehearsals/rehearsal-mark';
import { EmptyState, StaleLine } from '@/components/ui/page-states';
import { PageTitle, Section } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { STATE_WORDS } from '@/lib/analysis-words';
import { formatCount } from '@/lib/format/count';
import type { AnalysisView, CandidateView, MeasuresView, TrackRowView } from '@/lib/views/analysis-view';
import type { DetailsView } from '@/lib/views/details-view';
import type { PairSummary } from '@/tracking/flow-measures';
import { AnalysisSourceProvider } from './analysis-source';
import { CandidatesSection } from './candidates-section';
import { ComparisonSection } from './comparison-section';
import { DownloadsSection } from './downloads-section';
import { EstimatesSection } from './estimates-section';
import { MotionSection } from './motion-section';
import { OverTimeSection } from './over-time-section';
import { PdfSection } from './pdf-section';
import { PopulationSection } from './population-section';
import { ProfilesSection } from './profiles-section';
import { ProgressPanel } from './progress-panel';
import { ProvenanceSection } from './provenance-section';
import { ShapeSection } from './shape-section';
import { TrackTable } from './track-table';

interface AnalysisSheetProps {
  initial: AnalysisView;
  recording: ViewedRecording & { sha256: string | null };
  /** The run's conditions in one line. */
  conditions: string;
  stopReason: string | null;
  downloadReason: string | null;
  /** The way to the review desk, for those who have something to do there. */
  judge: { href: string; label: string } | null;
  /** Why this person can't sign off; null where they may. */
  signOffReason: string | null;
}

const TWO_COLUMNS =
  'grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-6 pt-[22px] aside:grid-cols-[minmax(0,1fr)_484px]';

const LINKED = ['measure-flow', 'done'];

/** Everything of an analysis: tracks over frames, what was measured, and where it comes from. */
export function AnalysisSheet({
  initial,
  recording,
  conditions,
  stopReason,
  downloadReason,
  judge,
  signOffReason,
}: AnalysisSheetProps) {
  const { data: analysis = initial, isError } = useProgress(initial.id, initial);
  const done = analysis.state === 'done';
  const measures = useMeasures(initial.id, done);
  const candidates = useCandidates(initial.id, done);
  // Opened in the middle, where tracks have a past to show.
  const store = useViewerStore(recording.frames, { ...recording, frame: Math.floor(recording.frames / 2) });
  const chosenTrack = useViewer(store, (state) => state.chosenTrack);
  const chosenEvent = useViewer(store, (state) => state.chosenEvent);
  const [well, setWell] = useState<HTMLDivElement | null>(null);
  const linked = LINKED.includes(analysis.stage);

  const show = (frame: number, track: number, event: number | null) => {
    store.goTo(frame);
    store.set({ chosenTrack: track, chosenEvent: event, bring: track });
    well?.scrollIntoView({ block: 'start' });
    well?.querySelector<HTMLElement>('[role=application]')?.focus({ preventScroll: true });
  };
  const showTrack = ({ firstFrame, lastFrame, track }: TrackRowView) =>
    show((firstFrame + lastFrame) / 2, track, null);
  const showCandidate = ({ t0_s, trackA, event }: CandidateView) =>
    show(recording.frameIntervalS ? t0_s / recording.frameIntervalS : 0, trackA, event);

  const notYet = (
    <EmptyState>
      {analysis.state === 'waiting' || analysis.state === 'running'
        ? 'Numbers appear here when the flow is measured.'
        : 'This analysis ended before anything was measured.'}
    </EmptyState>
  );

  const { recipe } = analysis;
  const source = {
    recording: analysis.recordingName,
    sha256: recording.sha256,
    recipe: analysis.recipeName ?? 'unnamed recipe',
    seed: String(recipe.seed ?? 'auto'),
    draws: String(recipe.bootstrapDraws ?? 'auto'),
    codeVersion: analysis.codeVersion,
  };

  return (
    <AnalysisSourceProvider value={source}>
      <PageTitle
        state={<StateWord state={analysis.state}>{STATE_WORDS[analysis.state]}</StateWord>}
        aside={<span className="text-note">{conditions}</span>}
      >
        {analysis.recordingName}, {analysis.recipeName ?? 'unnamed recipe'}
      </PageTitle>
      <RehearsalLine rehearsal={analysis.rehearsal} />
      {done ? <HereToo analysisId={initial.id} place="analysis" /> : null}
      {isError ? <StaleLine what="The progress may be out of date.">It is asked for again.</StaleLine> : null}
      <ProgressPanel analysis={analysis} stopReason={stopReason} />
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-6 pt-3 aside:grid-cols-[minmax(0,1fr)_484px]">
        <div ref={setWell} className="min-w-0 scroll-mt-3">
          <TrackViewer
            store={store}
            recording={recording}
            analysisId={initial.id}
            ready={linked ? analysis.stage : null}
            spotsPerFrame={measures.data?.spotsPerFrame ?? []}
            candidates={candidates.data ?? []}
          />
          {done ? (
            <Answer query={measures} what="the estimates">
              {(data) =>
                data ? (
                  <>
                    <EstimatesSection estimates={data.estimates} />
                    {data.details ? <DetailSections details={data.details} /> : null}
                  </>
                ) : null
              }
            </Answer>
          ) : null}
        </div>
        <div className="min-w-0">
          {done ? (
            <Answer query={measures} what="populations and velocities">
              {(data) =>
                data ? (
                  <>
                    <PopulationSection
                      populations={data.populations}
                      details={data.details}
                      onShow={(track, frame) => show(frame, track, null)}
                    />
                    <PdfSection pdfs={data.pdfs} />
                    <MotionSection
                      motion={data.motion}
                      accelerations={data.details?.accelerations ?? []}
                      pdfs={data.pdfs}
                      spacingM={spacingOf(data)}
                    />
                  </>
                ) : null
              }
            </Answer>
          ) : (
            notYet
          )}
          {done ? <StandingSection analysis={analysis} signOffReason={signOffReason} /> : null}
          <ProvenanceSection analysis={analysis} sha256={recording.sha256} />
          <DownloadsSection
            analysisId={initial.id}
            reason={downloadReason ?? (done ? null : 'Files can be had once the analysis is done.')}
          />
        </div>
      </div>
      {done ? (
        <Answer query={candidates} what="the candidates">
          {(list) => (
            <CandidatesSection
              candidates={list ?? []}
              pairs={pairsOf(measures.data?.populations)}
              judge={judge}
              chosen={chosenEvent}
              onChoose={({ event }) => store.set({ chosenEvent: event })}
              onShow={showCandidate}
            />
          )}
        </Answer>
      ) : null}
      <div className={TWO_COLUMNS}>
        <TrackTable
          analysisId={initial.id}
          tracks={analysis.summary?.tracks ?? null}
          ready={linked ? analysis.stage : null}
          chosen={chosenTrack}
          onShow={showTrack}
        />
        <Section
          title="Spots per frame"
          count={analysis.summary ? `${formatCount(analysis.summary.spots)} in all` : undefined}
        >
          {measures.data ? (
            <SpotsPlot
              counts={measures.data.spotsPerFrame}
              label={spotsSentence(measures.data.spotsPerFrame)}
            />
          ) : (
            <EmptyState>Counts appear when the frames have been searched.</EmptyState>
          )}
        </Section>
      </div>
    </AnalysisSourceProvider>
  );
}

/** Under the frames, beside populations and velocities: what is expected, the course over time, profiles, shape. */
function DetailSections({ details }: { details: DetailsView }) {
  const expected = details.comparisons.find(({ what }) => what === 'trapped along')?.expected ?? [];
  return (
    <>
      <ComparisonSection comparisons={details.comparisons} />
      <OverTimeSection overTime={details.overTime} />
      <ProfilesSection profiles={details.profiles} expected={expected.filter(({ value }) => value !== 0)} />
      {details.shape ? <ShapeSection shape={details.shape} /> : null}
    </>
  );
}

/** The combined line spacing, m. */
const spacingOf = ({ estimates }: MeasuresView) =>
  estimates.find(({ quantity, method }) => quantity === 'line_spacing' && method === 'combined')?.value ??
  null;

function pairsOf(populations: Record<string, unknown> | undefined): PairSummary | null {
  const pairs = populations?.pairs;
  return typeof pairs === 'object' && pairs !== null ? (pairs as PairSummary) : null;
}

function spotsSentence(counts: readonly number[]): string {
  if (counts.length === 0) return 'No frame was searched.';
  const mean = counts.reduce((sum, count) => sum + count, 0) / counts.length;
  return `Spots per frame over ${counts.length} frames: ${mean.toFixed(1)} on average, ${Math.min(...counts)} to ${Math.max(...counts)}.`;
}
