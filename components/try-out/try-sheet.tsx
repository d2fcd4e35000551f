'use client';

import { useRouter } from 'next/navigation';
import { useEffect, useMemo, useState } from 'react';
import { RecipeFields } from '@/components/analyses/recipe-fields';
import { RECIPE_GROUPS } from '@/components/analyses/recipe-words';
import { useRecipeForm } from '@/components/analyses/use-recipe-form';
import { drawSpots } from '@/components/canvas/draw-spots';
import { drawTracks } from '@/components/canvas/draw-tracks';
import type { OverlayScene } from '@/components/canvas/frame-well';
import { toTrackBlock } from '@/components/canvas/track-block';
import { useViewer, useViewerStore } from '@/components/canvas/use-viewer';
import { ViewerPanel, type ViewedRecording } from '@/components/canvas/viewer-panel';
import { useStartAnalysis } from '@/components/data/use-recording';
import { useTryOut } from '@/components/data/use-try-out';
import { Button } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { LoadingBars } from '@/components/ui/loading-bars';
import { ErrorState, StaleLine } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { formatDuration } from '@/lib/format/duration';
import { TryAnswers } from './try-answers';
import { tryFrames, TRY_FRAMES_MOST, type TryChoice } from './try-frames';
import { useSettled } from './use-settled';

/** A person who types is done when nothing has changed for this long. */
const REST_MS = 400;
/** What a few frames can show: finding and linking. Populations need the whole recording. */
const GROUPS = RECIPE_GROUPS.slice(0, 2);

const CHOICES = [
  { value: 'row', label: 'in a row' },
  { value: 'spread', label: 'spread out' },
] as const;

interface TrySheetProps {
  recording: ViewedRecording;
  /** Why no analysis can be started from here; null when one can. */
  startReason: string | null;
}

/** A recipe tried on a few frames, anew whenever a field changes. */
export function TrySheet({ recording, startReason }: TrySheetProps) {
  const middle = Math.floor(recording.frames / 2);
  const [choice, setChoice] = useState<TryChoice>('row');
  const [from, setFrom] = useState(middle);
  const frames = useMemo(() => tryFrames(choice, from, recording.frames), [choice, from, recording.frames]);
  const store = useViewerStore(recording.frames, { ...recording, frame: frames[frames.length - 1] });
  const frame = useViewer(store, (state) => state.frame);
  const form = useRecipeForm();
  const recipe = useSettled(form.recipe, REST_MS);
  const query = useTryOut(recording.id, frames, recipe);
  const answer = query.data ?? null;
  const block = useMemo(() => (answer ? toTrackBlock(answer.tracks) : null), [answer]);

  useEffect(() => {
    if (!frames.includes(store.get().frame)) store.goTo(frames[frames.length - 1]);
  }, [frames, store]);

  const drawOverlay = ({ ctx, state, view, well, colours }: OverlayScene) => {
    const found = answer?.frames.find((one) => one.frame === state.shown);
    if (!answer || !found) return;
    if (block) {
      const options = { frame: state.shown, trailFrames: TRY_FRAMES_MOST, view, well, colours };
      drawTracks(ctx, block, { ...options, chosen: null });
    }
    drawSpots(ctx, found.spots, view, well, answer.imageFacts.spotSigmaPx);
  };
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-6 desk:grid-cols-[minmax(0,1fr)_300px]">
      <div className="min-w-0">
        <ViewerPanel store={store} recording={recording} drawOverlay={drawOverlay} overlayVersion={answer}>
          <div className="flex flex-wrap items-center gap-2 pt-1">
            <Segment label="Frames to try" options={CHOICES} value={choice} onChange={setChoice} />
            {choice === 'row' && !frames.includes(frame) ? (
              <Button onClick={() => setFrom(frame)}>Try from this frame on</Button>
            ) : null}
            <span className="text-note text-ink-2 hand:ml-auto">
              thread under a spot; dashed: cut, merged or drawn out
            </span>
          </div>
        </ViewerPanel>
        <Section title="What it finds" count={<Working query={query} />}>
          {query.isError ? (
            <div className="pb-2">
              <ErrorState
                live
                what="This recipe could not be tried."
                action={<Button onClick={() => void query.refetch()}>Try again</Button>}
              >
                {query.error.message}
              </ErrorState>
            </div>
          ) : null}
          {form.recipe === null && answer ? (
            <StaleLine what="These are of the recipe before.">A field needs another value.</StaleLine>
          ) : null}
          {answer ? (
            <TryAnswers answer={answer} shown={frame} onFrame={(next) => store.goTo(next)} />
          ) : query.isError ? null : (
            <LoadingBars label="Finding spots" />
          )}
        </Section>
      </div>
      <div className="min-w-0">
        <RecipeFields
          texts={form.texts}
          errors={form.errors}
          onText={form.setText}
          groups={GROUPS}
          columns="grid-cols-2"
        />
        <StartHere recordingId={recording.id} form={form} reason={startReason} />
      </div>
    </div>
  );
}

function Working({ query }: { query: ReturnType<typeof useTryOut> }) {
  return (
    <span aria-live="polite">
      {query.isFetching ? (
        <StateWord state="running">
          {query.failureCount > 0 ? 'others are trying too, waits for its turn' : 'computing'}
        </StateWord>
      ) : query.data ? (
        `computed in ${formatDuration(query.data.tookMs / 1000)}`
      ) : null}
    </span>
  );
}

interface StartHereProps {
  recordingId: string;
  form: ReturnType<typeof useRecipeForm>;
  reason: string | null;
}

/** Starts the full analysis with the recipe in the fields. */
function StartHere({ recordingId, form, reason }: StartHereProps) {
  const start = useStartAnalysis(recordingId);
  const router = useRouter();
  const [problem, setProblem] = useState<string | null>(null);
  const run = () => {
    if (!form.recipe) return;
    setProblem(null);
    start.mutate(
      { recipe: form.recipe, idempotencyKey: crypto.randomUUID() },
      {
        onSuccess: ({ id }) => router.push(`/analyses/${id}`),
        onError: (error) => setProblem(form.refuse(error)),
      },
    );
  };
  return (
    <div>
      <div className="flex flex-wrap gap-2">
        <Button
          kind="main"
          busy={start.isPending}
          disabled={form.recipe === null}
          reason={reason}
          onClick={run}
        >
          Analyse all frames
        </Button>
        <Button kind="bare" onClick={() => form.reset()}>
          All to auto
        </Button>
      </div>
      {problem ? (
        <div className="pt-2">
          <ErrorState live what="The analysis did not start.">
            {problem}
          </ErrorState>
        </div>
      ) : null}
    </div>
  );
}
