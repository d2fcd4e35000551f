'use client';

import { SeparationPlot } from '@/components/charts/separation-plot';
import { Button } from '@/components/ui/button';
import { Quantity } from '@/components/ui/quantity';
import { Facts } from '@/components/ui/sheet';
import { formatCount } from '@/lib/format/count';
import type { CandidateView } from '@/lib/views/analysis-view';
import { candidateSentence, chanceText, separationFits, separationPoints } from './candidate-words';

interface CandidateDetailProps {
  candidate: CandidateView;
  onShow: (candidate: CandidateView) => void;
}

/** The separation of a pair with its fits, the numbers of the fits, and what it fails. */
export function CandidateDetail({ candidate, onShow }: CandidateDetailProps) {
  const { before, after, failed } = candidate;
  return (
    <div className="min-w-0">
      <div className="flex flex-wrap items-center gap-x-3 pb-1">
        <h3 className="text-note font-strong">
          Event {formatCount(candidate.event)}: tracks {formatCount(candidate.trackA)} and{' '}
          {formatCount(candidate.trackB)}
        </h3>
        <Button className="ml-auto" onClick={() => onShow(candidate)}>
          Show in the frames
        </Button>
      </div>
      <SeparationPlot
        points={separationPoints(candidate)}
        fits={separationFits(candidate)}
        t0_s={candidate.t0_s}
        label={candidateSentence(candidate)}
        fileName={`separation-event-${candidate.event}`}
        heightPx={260}
      />
      <Facts
        items={[
          { name: 'Before', value: <Side side={before} /> },
          { name: 'After', value: <Side side={after} /> },
          {
            name: 'By chance',
            value: `p ${chanceText(candidate.pChance) || 'not known'}, q ${chanceText(candidate.qValue) || 'not known'}`,
          },
          ...(failed.length > 0
            ? [
                {
                  name: 'Fails',
                  value: (
                    <ul>
                      {failed.map((sentence) => (
                        <li key={sentence}>{sentence}</li>
                      ))}
                    </ul>
                  ),
                },
              ]
            : []),
        ]}
      />
      <p className="pt-1 text-small text-ink-3">Line: square-root law. Dotted: straight fly-by.</p>
    </div>
  );
}

function Side({ side }: { side: CandidateView['before'] }) {
  if (!side) return <>not enough points</>;
  return (
    <>
      <i>A</i> <Quantity value={side.amplitude} uncertainty={side.amplitudeError} />, exponent{' '}
      <Quantity value={side.exponent} uncertainty={side.exponentError} unknown="not known" />, from{' '}
      {side.points} points
    </>
  );
}
