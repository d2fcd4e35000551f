import { Quantity } from '@/components/ui/quantity';
import { ScrollBox } from '@/components/ui/scroll-box';
import { Section } from '@/components/ui/sheet';
import type { ReportedEvent } from '@/lib/report/events';
import { LookAgain } from './look-again';
import { StripPicture } from './strip-picture';

/** Frames of some reconnections, of each run those that stand out most. */
export function ReportEvents({ events }: { events: readonly ReportedEvent[] }) {
  if (events.length === 0) return null;
  return (
    <Section title="Reconnections" count="of each run those that stand out most">
      <div className="grid gap-y-5">
        {events.map((one) => (
          <figure key={one.id} className="min-w-0 break-inside-avoid">
            <ScrollBox label={`Frames of candidate ${one.event} of ${one.runName}`}>
              <StripPicture
                candidateId={one.id}
                state={one.strip}
                words={`Frames around the closest approach of candidate ${one.event} of ${one.runName}, with both tracks, times and a scale bar.`}
              />
            </ScrollBox>
            <figcaption className="pt-1 text-note text-ink-2">
              <b className="font-strong text-ink">{one.runName}</b>, candidate {one.event} at{' '}
              <Quantity value={one.t0S} uncertainty={one.t0ErrorS} unit="s" />:{' '}
              {one.confirmed ? 'an event by people’s verdict' : 'accepted by the machine, not judged yet'}
              <Exponent name="approach" of={one.exponentBefore} />
              <Exponent name="separation" of={one.exponentAfter} />
              {one.qValue === null ? null : (
                <>
                  ; false discovery rate at its place <Quantity value={one.qValue} />
                </>
              )}
              .
            </figcaption>
          </figure>
        ))}
      </div>
      {events.some(({ strip }) => strip === 'composing') ? <LookAgain /> : null}
    </Section>
  );
}

function Exponent({ name, of }: { name: string; of: ReportedEvent['exponentBefore'] }) {
  if (!of) return null;
  return (
    <>
      , exponent of {name} <Quantity {...of} />
    </>
  );
}
