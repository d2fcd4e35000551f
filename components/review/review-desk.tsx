'use client';

import { useCallback, useRef, useState } from 'react';
import { useQuery } from '@tanstack/react-query';
import { HereToo } from '@/components/corrections/here-too';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { Button, ButtonLink } from '@/components/ui/button';
import { LoadingBars } from '@/components/ui/loading-bars';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { PathThread, type PathLevel } from '@/components/ui/path-thread';
import { ProgressThread } from '@/components/ui/progress-thread';
import { PageTitle } from '@/components/ui/sheet';
import { filledBeads } from '@/components/ui/thread-beads';
import { formatCount } from '@/lib/format/count';
import { actionOfKey, type ReviewKeys } from '@/lib/review/review-keys';
import { REASONS, VERDICT_WORDS, type Verdict } from '@/lib/review/verdict-words';
import type { ReviewQueueView } from '@/lib/views/review-view';
import { CandidatePictures, type Scale } from './candidate-view';
import * as way from './desk-order';
import { MeasuredTable } from './measured-table';
import { markJudged, measureNextCandidate } from './next-candidate-time';
import { OutboxLine } from './outbox-line';
import { useCandidate } from './use-candidate';
import { useDeskKeys } from './use-desk-keys';
import { useOutbox } from './use-outbox';
import { VerdictPanel, type Draft } from './verdict-panel';

interface ReviewDeskProps {
  analysisId: string;
  /** Of the person in this laboratory, for what is kept in the browser. */
  owner: string;
  scale: Scale;
  keys: ReviewKeys;
  levels: readonly PathLevel[];
  /** How many people judge each candidate. */
  readings: number;
  /** A candidate to open with. */
  first: string | null;
}

const EMPTY: Draft = { verdict: null, reason: '', note: '', inWords: false };
/** Beads on the thread at most; more candidates share them. */
const BEADS_MOST = 40;

/** The candidates of an analysis, one at a time, for a person with a keyboard. */
export function ReviewDesk(props: ReviewDeskProps) {
  const queue = useQuery({
    queryKey: ['review-queue', props.analysisId],
    queryFn: ({ signal }) =>
      api<ReviewQueueView>(`/api/v1/analyses/${props.analysisId}/review-queue`, { signal }),
    // The way of a sitting stays as it began: nothing moves under a reader's hands.
    staleTime: Infinity,
    gcTime: 0,
  });
  if (queue.data) return <Sitting {...props} queue={queue.data} />;
  return (
    <>
      <PathThread levels={props.levels} />
      <main id="main" tabIndex={-1} className="px-sheet-x-narrow pb-8 pt-4 outline-none hand:px-sheet-x">
        <h1 className="sr-only">Candidates</h1>
        <Answer query={queue} what="the candidates">
          {() => null}
        </Answer>
      </main>
    </>
  );
}

function Sitting({ queue, ...props }: ReviewDeskProps & { queue: ReviewQueueView }) {
  const { keys, scale, levels, owner } = props;
  const [sitting, setSitting] = useState(() => way.beginSitting(queue.items, props.first));
  const [draft, setDraft] = useState<Draft>(EMPTY);
  const { outbox, state } = useOutbox(owner);
  // How many verdicts were given on a candidate since it was fetched: the revision grows by so many.
  const given = useRef(new WeakMap<object, number>());
  const noteField = useRef<HTMLTextAreaElement>(null);
  const id = way.candidateAt(sitting);
  const { loaded, failure, retry } = useCandidate(id, way.comingUp(sitting, 8));
  const drawn = useCallback(() => (id ? measureNextCandidate(id) : undefined), [id]);
  const said = id ? (sitting.said[id] ?? null) : null;

  const move = useCallback((to: way.Sitting) => {
    setSitting(to);
    setDraft(EMPTY);
  }, []);

  function commit(verdict: Verdict, reason: string | null) {
    if (!id || !loaded?.detail.own) return;
    markJudged();
    const { own, event } = loaded.detail;
    const steps = given.current.get(own) ?? outbox.pendingOf(id);
    given.current.set(own, steps + 1);
    const revision = own.revision + steps;
    outbox.add({
      id: crypto.randomUUID(),
      candidateId: id,
      event,
      verdict,
      reason: reason?.trim() || null,
      note: draft.note.trim() || null,
      revision,
      steps: own.history.length + steps,
    });
    if (document.activeElement instanceof HTMLElement) document.activeElement.blur();
    move(way.afterVerdict(sitting, id, verdict));
  }

  function choose(verdict: Verdict) {
    if (!loaded) return;
    if (verdict === 'yes') commit('yes', null);
    else setDraft({ ...draft, verdict, reason: '', inWords: false });
  }

  function writeReason() {
    setDraft({ ...draft, inWords: true, reason: '' });
  }

  const asked = draft.verdict !== null && draft.verdict !== 'yes' ? draft.verdict : null;
  useDeskKeys((key) => {
    const action = actionOfKey(keys, key);
    if (asked && key === 'Enter') {
      commit(asked, draft.reason || null);
      return true;
    }
    if (asked && key === 'Escape') {
      setDraft({ ...draft, verdict: null, reason: '', inWords: false });
      return true;
    }
    switch (action) {
      case 'yes':
      case 'no':
      case 'cannot-tell':
        choose(action);
        return true;
      case 'note':
        noteField.current?.focus();
        return true;
      case 'back':
        move(way.goBack(sitting));
        return true;
      case 'later':
        move(way.postpone(sitting));
        return true;
      case 'other':
        if (asked) writeReason();
        return asked !== null;
      case null:
      case 'play':
        return false;
      default: {
        const reason = REASONS.find((known) => known.key === action);
        if (asked && reason) commit(asked, reason.words);
        return asked !== null;
      }
    }
  });

  const total = sitting.ids.length;
  const done = way.judgedCount(sitting);
  const beads = Math.min(total, BEADS_MOST);
  const progress =
    total > 0 ? (
      <span className="flex items-center gap-3 text-note text-ink-2" data-testid="progress">
        {formatCount(done)} of {formatCount(total)}
        <ProgressThread
          stages={[{ beads, filled: total <= BEADS_MOST ? done : filledBeads(done / total, beads) }]}
          label={`${done} of ${total} judged`}
        />
      </span>
    ) : null;

  return (
    <>
      <PathThread levels={levels} actions={progress} />
      <main
        id="main"
        tabIndex={-1}
        className="px-sheet-x-narrow pb-24 pt-4 outline-none hand:px-sheet-x desk:pb-8"
      >
        <OutboxLine state={state} outbox={outbox} />
        <HereToo analysisId={props.analysisId} place="verdicts" />
        {id === null ? (
          <End total={total} keys={keys} back={() => move(way.goBack(sitting))} />
        ) : (
          <>
            <PageTitle
              aside={
                <span className="text-note">
                  {(scale.frameIntervalS * 1e3).toPrecision(3)} ms per frame,{' '}
                  {(scale.pixelSizeM * 1e6).toPrecision(3)} µm/px
                </span>
              }
            >
              {loaded ? `Candidate ${formatCount(loaded.detail.event)}` : 'Candidate'}{' '}
              {loaded ? (
                <span className="font-sans text-body font-text tracking-normal text-ink-2">
                  tracks {formatCount(loaded.detail.trackA)} and {formatCount(loaded.detail.trackB)}, frame{' '}
                  {formatCount(loaded.detail.film.middleFrame)}, {loaded.detail.t0_s.toFixed(3)} s
                </span>
              ) : null}
            </PageTitle>
            <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-5 desk:grid-cols-[minmax(0,1fr)_320px]">
              <div className="min-w-0">
                {loaded ? (
                  <CandidatePictures loaded={loaded} scale={scale} playKey={keys.play} onDrawn={drawn} />
                ) : failure ? (
                  <ErrorState live what={failure} action={<Button onClick={retry}>Try again</Button>} />
                ) : (
                  <LoadingBars label="The candidate" />
                )}
              </div>
              <aside aria-label="Your verdict" className="desk:border-l desk:border-line desk:pl-7">
                <VerdictPanel
                  question="Do these two lines reconnect?"
                  keys={keys}
                  draft={draft}
                  said={said}
                  onVerdict={choose}
                  onReason={(reason) => asked && commit(asked, reason)}
                  onInWords={writeReason}
                  onDraft={(change) => setDraft({ ...draft, ...change })}
                  onCommit={() => asked && commit(asked, draft.reason)}
                  noteField={noteField}
                />
                {said ? (
                  <p className="pt-2 text-note">
                    You said “{VERDICT_WORDS[said].toLowerCase()}”. Another verdict takes its place; what you
                    said is kept.
                  </p>
                ) : null}
                {loaded ? (
                  <div className="pt-[14px]">
                    <MeasuredTable candidate={loaded.detail} />
                  </div>
                ) : null}
                <p className="pt-3 text-small text-ink-2">
                  {props.readings > 1
                    ? `${formatCount(props.readings)} people judge each candidate, each without knowing what the others said.`
                    : 'You judge without knowing what others said.'}
                  {queue.known > 0
                    ? ` Among these ${formatCount(total)} are ${formatCount(queue.known)} of rehearsals, whose truth is known: they measure how well readers judge, and count in no result.`
                    : null}
                </p>
                <div className="flex flex-wrap gap-2 pt-[14px]">
                  <Button
                    keyCap={keys.back.toUpperCase()}
                    disabled={sitting.at === 0}
                    onClick={() => move(way.goBack(sitting))}
                  >
                    Back
                  </Button>
                  <Button keyCap={keys.later.toUpperCase()} onClick={() => move(way.postpone(sitting))}>
                    Later
                  </Button>
                  {loaded ? (
                    <ButtonLink
                      href={`/analyses/${loaded.detail.analysisId}/edit?frame=${loaded.detail.film.middleFrame}&track=${loaded.detail.trackA}`}
                    >
                      Correct the tracks
                    </ButtonLink>
                  ) : null}
                </div>
                <p className="pt-3 text-small text-ink-3">
                  Order: {queue.order} <a href="/account#review-keys">Change the keys</a>
                </p>
              </aside>
            </div>
          </>
        )}
      </main>
    </>
  );
}

function End({ total, keys, back }: { total: number; keys: ReviewKeys; back: () => void }) {
  return (
    <>
      <h1 className="sr-only">Candidates</h1>
      <EmptyState
        action={
          <span className="flex flex-wrap justify-center gap-2">
            <ButtonLink kind="main" href="/review">
              To the review desk
            </ButtonLink>
            {total > 0 ? (
              <Button keyCap={keys.back.toUpperCase()} onClick={back}>
                Back
              </Button>
            ) : null}
          </span>
        }
      >
        {total > 0 ? 'That was the last one. Nothing waits for you here.' : 'Nothing waits for you here.'}
      </EmptyState>
    </>
  );
}
