'use client';

import { useState } from 'react';
import { Button, ButtonLink } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { EmptyState } from '@/components/ui/page-states';
import { Quantity } from '@/components/ui/quantity';
import { Section } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { countOf, formatCount } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import { REVIEW_STATE_WORDS, VERDICT_WORDS } from '@/lib/review/verdict-words';
import type { CandidateView } from '@/lib/views/analysis-view';
import type { PairSummary } from '@/tracking/flow-measures';
import { CandidateDetail } from './candidate-detail';
import { chanceText } from './candidate-words';
import { SourceFold } from './source-fold';

const ROWS = 12;
const WHICH = [
  { value: 'accepted', label: 'accepted' },
  { value: 'both', label: 'seen before and after' },
  { value: 'one', label: 'one side' },
] as const;
type Which = (typeof WHICH)[number]['value'];

/** A partner appears or vanishes with the meeting: only one side of it is seen. */
const isOneSided = ({ before, after }: CandidateView) => before === null || after === null;

interface CandidatesSectionProps {
  candidates: readonly CandidateView[];
  pairs: PairSummary | null;
  /** The way to the review desk, for those who have something to do there. */
  judge: { href: string; label: string } | null;
  chosen: number | null;
  onChoose: (candidate: CandidateView) => void;
  onShow: (candidate: CandidateView) => void;
}

/** Pairs of tracks that meet and part, and what is known of the one that is chosen. */
export function CandidatesSection({
  candidates,
  pairs,
  judge,
  chosen,
  onChoose,
  onShow,
}: CandidatesSectionProps) {
  const accepted = candidates.filter((candidate) => candidate.accepted);
  const events = candidates.filter(({ verdict }) => verdict === 'yes').length;
  const [which, setWhich] = useState<Which>(accepted.length > 0 ? 'accepted' : 'both');
  const [shown, setShown] = useState(ROWS);
  const listed = {
    accepted,
    both: candidates.filter((candidate) => !isOneSided(candidate)),
    one: candidates.filter(isOneSided),
  }[which];
  const current = candidates.find(({ event }) => event === chosen) ?? listed[0] ?? null;
  return (
    <Section
      id="candidates"
      title="Reconnection candidates"
      count={`${formatCount(accepted.length)} of ${countOf(candidates.length, 'pair')} accepted, ${countOf(events, 'event')} confirmed by people`}
      tools={
        candidates.length > 0 ? (
          <>
            {judge ? <ButtonLink href={judge.href}>{judge.label}</ButtonLink> : null}
            <Segment label="Candidates" options={WHICH} value={which} onChange={setWhich} />
          </>
        ) : null
      }
    >
      {pairs?.note ? <p className="pb-1 text-note text-ink-2">{pairs.note}</p> : null}
      {candidates.length === 0 ? (
        <EmptyState>No pair of trapped tracers came near enough and parted again.</EmptyState>
      ) : (
        <div className="grid gap-x-9 gap-y-5 aside:grid-cols-[minmax(0,1fr)_484px]">
          <div className="min-w-0">
            {listed.length === 0 ? (
              <EmptyState>
                {which === 'accepted' ? 'No pair passes every criterion.' : 'No pair is of this kind.'}
              </EmptyState>
            ) : (
              <Table label="Reconnection candidates" density="dense">
                <thead>
                  <tr>
                    <HeadCell className="pl-2">Event</HeadCell>
                    <HeadCell numeric unit="s">
                      <i>t</i>
                      <sub>0</sub>
                    </HeadCell>
                    <HeadCell narrow="hide">Tracks</HeadCell>
                    <HeadCell narrow="hide">Seen</HeadCell>
                    <HeadCell numeric narrow="hide" unit="µm">
                      Closest
                    </HeadCell>
                    <HeadCell numeric>
                      <i>q</i>
                    </HeadCell>
                    <HeadCell>Criteria</HeadCell>
                    <HeadCell>Verdict</HeadCell>
                    <HeadCell silent>In the frames</HeadCell>
                  </tr>
                </thead>
                <tbody>
                  {listed.slice(0, shown).map((candidate) => (
                    <CandidateRow
                      key={candidate.id}
                      candidate={candidate}
                      chosen={candidate.event === current?.event}
                      onChoose={onChoose}
                    />
                  ))}
                </tbody>
              </Table>
            )}
            {listed.length > shown ? (
              <Button className="mt-3" onClick={() => setShown(shown + 50)}>
                {`Show ${Math.min(50, listed.length - shown)} more`}
              </Button>
            ) : null}
            <SourceFold
              method="Pairs that come within the closest approach are found in cells, never by comparing all pairs. Each is fitted by δ² = m₀² + A²κ|t − t₀| before and after (Paoletti, Fisher & Lathrop, Physica D 239, 1367 (2010)) and by a straight fly-by; the Bayesian criterion tells them apart. Chance from independent tracks laid over each other; false discovery rate after Benjamini & Hochberg 1995, for meetings seen on both sides and on one apart."
              inputs={
                pairs
                  ? [
                      { name: 'Tested', value: countOf(pairs.tested, 'pair') },
                      { name: 'By chance', value: chanceSentence(pairs) },
                    ]
                  : []
              }
            />
          </div>
          {current ? <CandidateDetail candidate={current} onShow={onShow} /> : null}
        </div>
      )}
    </Section>
  );
}

const chanceSentence = ({ expectedByChance, surrogates }: PairSummary) =>
  `${expectedByChance === null ? 'no number of' : expectedByChance.toFixed(1)} approaches expected of independent tracks; ${countOf(surrogates, 'surrogate meeting')}`;

interface CandidateRowProps {
  candidate: CandidateView;
  chosen: boolean;
  onChoose: (candidate: CandidateView) => void;
}

function CandidateRow({ candidate, chosen, onChoose }: CandidateRowProps) {
  const { event, t0_s, trackA, trackB, minSeparation_m, qValue, accepted, failed } = candidate;
  return (
    <Row selected={chosen}>
      <Cell head className="pl-2 tabular-nums">
        {formatCount(event)}
      </Cell>
      <Cell numeric>{t0_s.toFixed(3)}</Cell>
      <Cell narrow="hide" className="tabular-nums">
        {formatCount(trackA)} and {formatCount(trackB)}
      </Cell>
      <Cell narrow="hide">
        {candidate.before === null ? 'after' : candidate.after === null ? 'before' : 'both sides'}
      </Cell>
      <Cell numeric narrow="hide">
        <Quantity value={minSeparation_m} siPerUnit={DISPLAY_UNITS.smallLength.siPerUnit} digits={3} />
      </Cell>
      <Cell numeric>{chanceText(qValue)}</Cell>
      <Cell>
        {accepted ? (
          <StateWord state="done">accepted</StateWord>
        ) : (
          <StateWord state="stopped">{countOf(failed.length, 'criterion', 'criteria')} failed</StateWord>
        )}
      </Cell>
      <Cell>
        {candidate.verdict ? (
          VERDICT_WORDS[candidate.verdict]
        ) : (
          <span className="text-ink-3">
            {candidate.review === 'hidden' && candidate.ownVerdict
              ? `you: ${VERDICT_WORDS[candidate.ownVerdict].toLowerCase()}`
              : REVIEW_STATE_WORDS[candidate.review]}
          </span>
        )}
      </Cell>
      <Cell numeric>
        <button
          type="button"
          onClick={() => onChoose(candidate)}
          aria-label={`Plot event ${event}`}
          aria-pressed={chosen}
          className="min-h-6 underline decoration-line-strong underline-offset-[3px] hover:decoration-violet"
        >
          Plot
        </button>
      </Cell>
    </Row>
  );
}
