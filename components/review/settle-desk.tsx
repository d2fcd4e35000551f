'use client';

import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Answer } from '@/components/data/answer';
import { api } from '@/components/data/api-client';
import { Button, ButtonLink } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { TextArea } from '@/components/ui/field';
import { LoadingBars } from '@/components/ui/loading-bars';
import { Moment } from '@/components/ui/moment';
import { EmptyState, ErrorState } from '@/components/ui/page-states';
import { PathThread, type PathLevel } from '@/components/ui/path-thread';
import { PageTitle } from '@/components/ui/sheet';
import { countOf, formatCount } from '@/lib/format/count';
import { VERDICT_WORDS, VERDICTS, type Verdict } from '@/lib/review/verdict-words';
import type { ListView } from '@/lib/views/common';
import type { DisagreementView, ReadingsView } from '@/lib/views/review-view';
import { CandidatePictures, type Scale } from './candidate-view';
import { MeasuredTable } from './measured-table';
import { useCandidate } from './use-candidate';

interface SettleDeskProps {
  analysisId: string;
  scale: Scale;
  playKey: string;
  levels: readonly PathLevel[];
  /** A candidate to open with: a disagreement, or one that is looked at again. */
  first: string | null;
}

/** What readers disagree on, one at a time, for the person who decides. */
export function SettleDesk(props: SettleDeskProps) {
  const open = useQuery({
    queryKey: ['disagreements', props.analysisId],
    queryFn: ({ signal }) =>
      api<ListView<DisagreementView>>(`/api/v1/disagreements?analysis=${props.analysisId}&limit=200`, {
        signal,
      }),
    staleTime: Infinity,
    gcTime: 0,
  });
  const [settled, setSettled] = useState<readonly string[]>([]);
  const [first, setFirst] = useState(props.first);
  const ids = open.data ? waysOf(open.data.items, first).filter((id) => !settled.includes(id)) : [];
  const left = ids.length;
  const id = ids[0] ?? null;
  const next = () => {
    if (!id) return;
    setSettled([...settled, id]);
    if (id === first) setFirst(null);
  };
  return (
    <>
      <PathThread
        levels={props.levels}
        actions={
          open.data ? <span className="text-note text-ink-2">{countOf(left, 'candidate')} left</span> : null
        }
      />
      <main id="main" tabIndex={-1} className="px-sheet-x-narrow pb-8 pt-4 outline-none hand:px-sheet-x">
        <Answer query={open} what="the disagreements">
          {() =>
            id === null ? (
              <>
                <h1 className="sr-only">Disagreements</h1>
                <EmptyState
                  action={
                    <ButtonLink kind="main" href={`/analyses/${props.analysisId}`}>
                      To the analysis
                    </ButtonLink>
                  }
                >
                  {settled.length > 0 ? 'All is settled.' : 'Readers disagree on nothing here.'}
                </EmptyState>
              </>
            ) : (
              <Case key={id} id={id} coming={ids.slice(1)} {...props} onSettled={next} />
            )
          }
        </Answer>
      </main>
    </>
  );
}

function waysOf(items: readonly DisagreementView[], first: string | null): string[] {
  const ids = items.map(({ candidateId }) => candidateId);
  return first ? [first, ...ids.filter((id) => id !== first)] : ids;
}

interface CaseProps extends SettleDeskProps {
  id: string;
  coming: readonly string[];
  onSettled: () => void;
}

function Case({ id, coming, scale, playKey, onSettled }: CaseProps) {
  const client = useQueryClient();
  const { loaded, failure, retry } = useCandidate(id, coming);
  const readings = useQuery({
    queryKey: ['readings', id],
    queryFn: ({ signal }) => api<ReadingsView>(`/api/v1/candidates/${id}/readings`, { signal }),
  });
  const [verdict, setVerdict] = useState<Verdict | undefined>(undefined);
  const [reason, setReason] = useState('');
  const [key] = useState(() => crypto.randomUUID());
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);

  async function settle() {
    if (!verdict) return setProblem('Choose a verdict.');
    if (!reason.trim()) return setProblem('Say why: the reason stays with the verdict.');
    setBusy(true);
    setProblem(null);
    try {
      await api(`/api/v1/candidates/${id}/settlement`, {
        method: 'POST',
        body: { verdict, reason: reason.trim() },
        idempotencyKey: `${key}-${verdict}-${reason.trim().length}`,
      });
      await client.invalidateQueries({ queryKey: ['readings', id] });
      onSettled();
    } catch (error) {
      setProblem(error instanceof Error ? error.message : String(error));
      setBusy(false);
    }
  }

  return (
    <>
      <PageTitle>
        {loaded ? `Candidate ${formatCount(loaded.detail.event)}` : 'Candidate'}{' '}
        {loaded ? (
          <span className="font-sans text-body font-text tracking-normal text-ink-2">
            tracks {formatCount(loaded.detail.trackA)} and {formatCount(loaded.detail.trackB)},{' '}
            {loaded.detail.t0_s.toFixed(3)} s
          </span>
        ) : null}
      </PageTitle>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-5 desk:grid-cols-[minmax(0,1fr)_320px]">
        <div className="min-w-0">
          {loaded ? (
            <CandidatePictures key={id} loaded={loaded} scale={scale} playKey={playKey} />
          ) : failure ? (
            <ErrorState live what={failure} action={<Button onClick={retry}>Try again</Button>} />
          ) : (
            <LoadingBars label="The candidate" />
          )}
        </div>
        <aside aria-label="Readings and your word" className="desk:border-l desk:border-line desk:pl-7">
          <h2 className="pb-1 font-serif text-head2 font-strong">What the readers said</h2>
          <Answer query={readings} what="the readings">
            {(data) => <Readings view={data} />}
          </Answer>
          <h2 className="pt-[18px] font-serif text-head2 font-strong">Do these two lines reconnect?</h2>
          <form
            className="flex flex-col gap-3 pt-2"
            noValidate
            onSubmit={(event) => {
              event.preventDefault();
              void settle();
            }}
          >
            <Segment
              label="Verdict"
              options={VERDICTS.map((value) => ({ value, label: VERDICT_WORDS[value] }))}
              value={verdict ?? ('' as Verdict)}
              onChange={setVerdict}
            />
            <TextArea
              label="Reason"
              rows={3}
              maxLength={2000}
              value={reason}
              onChange={(event) => setReason(event.target.value)}
            />
            {problem ? <ErrorState live what={problem} /> : null}
            <span>
              <Button kind="main" type="submit" busy={busy}>
                Settle it
              </Button>
            </span>
          </form>
          {loaded ? (
            <div className="pt-[18px]">
              <MeasuredTable candidate={loaded.detail} />
            </div>
          ) : null}
        </aside>
      </div>
    </>
  );
}

function Readings({ view }: { view: ReadingsView }) {
  if (view.readings.length === 0) return <p className="text-note text-ink-2">Nobody has judged it yet.</p>;
  return (
    <ul className="flex flex-col gap-2 text-note">
      {view.readings.map((reading) => (
        <li key={reading.reader.id}>
          <span className="font-strong">{VERDICT_WORDS[reading.verdict]}</span>, {reading.reader.name},{' '}
          <Moment at={reading.at} />
          {reading.blind ? '' : ', with sight of the outcome'}
          {reading.history.length > 1 ? (
            <span className="text-ink-2">
              , before that{' '}
              {reading.history
                .slice(0, -1)
                .map(({ verdict }) => VERDICT_WORDS[verdict].toLowerCase())
                .join(', ')}
            </span>
          ) : null}
          {reading.reason ? <span className="block text-ink-2">because {reading.reason}</span> : null}
          {reading.note ? <span className="block whitespace-pre-wrap text-ink-2">{reading.note}</span> : null}
        </li>
      ))}
      {view.settlements.map((word) => (
        <li key={word.at}>
          <span className="font-strong">Settled: {VERDICT_WORDS[word.verdict].toLowerCase()}</span>,{' '}
          {word.by.name}, <Moment at={word.at} />
          <span className="block text-ink-2">{word.reason}</span>
        </li>
      ))}
    </ul>
  );
}
