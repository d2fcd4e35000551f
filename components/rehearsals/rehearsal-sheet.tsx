'use client';

import Link from 'next/link';
import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { Button, ButtonLink } from '@/components/ui/button';
import { SelectField } from '@/components/ui/choice';
import { ConfirmDialog } from '@/components/ui/dialog';
import { MarginNote } from '@/components/ui/margin-note';
import { EmptyState, ErrorState, StaleLine } from '@/components/ui/page-states';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import type { RehearsalResult } from '@/lib/views/rehearsal-view';
import { AdviceSection } from './advice-section';
import { BiasSection } from './bias-section';
import { DetectionSection, ErrorSection } from './detection-section';
import { EventsSection } from './events-section';
import { PlanFacts } from './plan-facts';
import { RehearsalThread, rehearsalWords, stageWords } from './rehearsal-thread';
import { PopulationTable, TrackScoresSection } from './track-sections';
import { removeRehearsal, useRehearsal, useStopRehearsal } from './use-rehearsal';

interface RehearsalSheetProps {
  initial: RehearsalResult;
  rights: { make: boolean; remove: boolean; stopReason: string | null };
}

/** A rehearsal: how far it is, and then what an analysis recovers of what went in. */
export function RehearsalSheet({ initial, rights }: RehearsalSheetProps) {
  const query = useRehearsal(initial);
  const rehearsal = query.data;
  const [chosen, setChosen] = useState<string | null>(null);
  const { state, stage, assessments } = rehearsal;
  const shown = assessments.find(({ analysisId }) => analysisId === chosen) ?? assessments[0];
  return (
    <Sheet
      marginLabel="The plan and what to do with it"
      margin={
        <>
          <div className="break-inside-avoid pb-[18px]">
            <PlanFacts rehearsal={rehearsal} />
          </div>
          <Where rehearsal={rehearsal} analysisId={shown?.analysisId ?? rehearsal.analysisId} />
          <Acts rehearsal={rehearsal} rights={rights} />
        </>
      }
    >
      <PageTitle
        state={<StateWord state={state}>{rehearsalWords(rehearsal)}</StateWord>}
        aside={
          <span className="text-note">
            rehearsal, {rehearsal.kind === 'simulated' ? 'simulated' : `planted in ${rehearsal.source?.name}`}
          </span>
        }
      >
        {rehearsal.name}
      </PageTitle>
      {query.isError ? <StaleLine what="This may be out of date.">It is asked for again.</StaleLine> : null}
      {state === 'done' ? null : <Progress rehearsal={rehearsal} stopReason={rights.stopReason} />}
      {shown ? (
        <>
          {assessments.length > 1 ? (
            <div className="max-w-[420px] pb-4">
              <SelectField
                label="Analysis that is compared"
                options={assessments.map(({ analysisId, recipeName, computedAt }) => ({
                  value: analysisId,
                  label: `${recipeName ?? 'unnamed recipe'}, ${computedAt.slice(0, 16).replace('T', ' ')} UTC`,
                }))}
                value={shown.analysisId}
                onChange={(event) => setChosen(event.target.value)}
              />
            </div>
          ) : null}
          <Result assessment={shown.assessment} analysisId={shown.analysisId} />
        </>
      ) : (
        <div className="pt-4">
          <EmptyState>
            {state === 'failed' || state === 'stopped'
              ? `It ended while ${stageWords(stage)}: nothing was compared.`
              : 'What is recovered appears here once the analysis has been compared with the truth.'}
          </EmptyState>
        </div>
      )}
    </Sheet>
  );
}

function Result({
  assessment,
  analysisId,
}: {
  assessment: RehearsalResult['assessments'][number]['assessment'];
  analysisId: string;
}) {
  // prettier-ignore
  return (
    <>
      <AdviceSection advice={assessment.advice} />
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-[22px] pt-[22px] desk:grid-cols-2">
        <DetectionSection detection={assessment.detection} />
        <ErrorSection detection={assessment.detection} />
      </div>
      <div className="pt-[22px]">
        <BiasSection estimates={assessment.estimates} truth={assessment.trueLineDensityM2} />
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-[22px] pt-[22px] desk:grid-cols-2">
        <TrackScoresSection tracks={assessment.tracks} />
        <PopulationTable populations={assessment.populations} />
      </div>
      <div className="pt-[22px]">
        <EventsSection events={assessment.events} analysisId={analysisId} />
      </div>
    </>
  );
}

function Progress({ rehearsal, stopReason }: { rehearsal: RehearsalResult; stopReason: string | null }) {
  const [asking, setAsking] = useState(false);
  const stop = useStopRehearsal(rehearsal.id);
  const { state, stage, progress, error } = rehearsal;
  const underway = state === 'waiting' || state === 'running';
  return (
    <div className="border-b border-line pb-3">
      <div className="flex flex-wrap items-center gap-x-5 gap-y-2">
        <RehearsalThread rehearsal={rehearsal} />
        <p aria-live="polite" className="text-note tabular-nums text-ink-2">
          {underway
            ? `${rehearsalWords(rehearsal)}, ${Math.floor(100 * progress)} % of all. You can leave this page; it goes on.`
            : `${state === 'failed' ? 'Failed' : 'Stopped'} while ${stageWords(stage)}.`}
        </p>
        {underway && stopReason === null ? (
          <Button className="ml-auto" onClick={() => setAsking(true)}>
            Stop
          </Button>
        ) : null}
      </div>
      {state === 'failed' ? (
        <div className="pt-2">
          <ErrorState what={`It failed while ${stageWords(stage)}.`}>{error?.detail}</ErrorState>
        </div>
      ) : null}
      <ConfirmDialog
        open={asking}
        onClose={() => setAsking(false)}
        question="Stop this rehearsal?"
        keep="Keep running"
        act="Stop it"
        onAct={async () => {
          await stop.mutateAsync();
        }}
      >
        Nothing is lost: the same plan and seed make the same frames again.
      </ConfirmDialog>
    </div>
  );
}

function Where({ rehearsal, analysisId }: { rehearsal: RehearsalResult; analysisId: string | null }) {
  if (!rehearsal.recordingId) return null;
  return (
    <MarginNote title="Its recording">
      <Link href={`/recordings/${rehearsal.recordingId}`}>See the frames</Link>
      {analysisId ? (
        <>
          {' '}
          and <Link href={`/analyses/${analysisId}`}>the analysis</Link>
        </>
      ) : null}
      . Analyse it again with another recipe, and that is compared too.
    </MarginNote>
  );
}

function Acts({ rehearsal, rights }: { rehearsal: RehearsalResult; rights: RehearsalSheetProps['rights'] }) {
  const router = useRouter();
  const [asking, setAsking] = useState(false);
  const ended = rehearsal.state !== 'waiting' && rehearsal.state !== 'running';
  if (!rights.make && !rights.remove) return null;
  return (
    <div className="flex flex-wrap gap-2 pb-[18px]">
      {rights.make ? (
        <ButtonLink href={`/rehearsals/new?from=${rehearsal.id}`}>Again with changes</ButtonLink>
      ) : null}
      {rights.remove && ended ? (
        <Button kind="bare" onClick={() => setAsking(true)}>
          Remove
        </Button>
      ) : null}
      <ConfirmDialog
        open={asking}
        onClose={() => setAsking(false)}
        question="Remove this rehearsal?"
        keep="Keep it"
        act="Remove it"
        onAct={async () => {
          await removeRehearsal(rehearsal.id);
          router.push('/rehearsals');
        }}
      >
        Its recording and what was compared are no longer shown. The same plan and seed make the same frames
        again.
      </ConfirmDialog>
    </div>
  );
}
