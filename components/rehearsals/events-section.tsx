import Link from 'next/link';
import { EmptyState } from '@/components/ui/page-states';
import { Section } from '@/components/ui/sheet';
import { StateWord, type BeadState } from '@/components/ui/state-bead';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import type { AssessmentView } from '@/lib/views/rehearsal-view';
import { shareText } from './share-text';

const GLYPHS: Record<AssessmentView['events']['events'][number]['outcome'], BeadState> = {
  found: 'done',
  'not accepted': 'stopped',
  'no candidate': 'failed',
};

/** Meetings that were made, and what became of each. */
export function EventsSection({
  events,
  analysisId,
}: {
  events: AssessmentView['events'];
  analysisId: string;
}) {
  // prettier-ignore
  const { efficiency, purity, accepted, acceptedTrue } = events;
  const rows = [...events.events].sort((a, b) => a.t0S - b.t0S);
  return (
    <Section
      flush
      title="Meetings"
      count={efficiency ? `${shareText(efficiency)} found` : 'none were made'}
      more={{ href: `/analyses/${analysisId}#candidates`, label: 'All candidates' }}
    >
      <p className="pb-2 text-note text-ink-2">
        {accepted === 0
          ? 'No candidate was accepted.'
          : purity
            ? `${acceptedTrue} of ${accepted} accepted candidates are meetings: ${shareText(purity)}.`
            : `${acceptedTrue} of ${accepted} accepted candidates are planted meetings; of the others nobody knows.`}
      </p>
      {rows.length === 0 ? (
        <EmptyState>No meetings were asked for.</EmptyState>
      ) : (
        <Table label="Meetings" density="dense">
          <thead>
            <tr>
              <HeadCell numeric unit="s">
                <i>t</i>
                <sub>0</sub>
              </HeadCell>
              <HeadCell numeric narrow="hide" unit="px">
                Place
              </HeadCell>
              <HeadCell numeric>Frames before, after</HeadCell>
              <HeadCell>Outcome</HeadCell>
            </tr>
          </thead>
          <tbody>
            {rows.map((event, i) => (
              <Row key={i}>
                <Cell numeric>{event.t0S.toFixed(3)}</Cell>
                <Cell numeric narrow="hide">
                  {event.xPx.toFixed(0)}, {event.yPx.toFixed(0)}
                </Cell>
                <Cell numeric>
                  {event.pointsBefore}, {event.pointsAfter}
                </Cell>
                <Cell>
                  <StateWord state={GLYPHS[event.outcome]}>
                    {event.candidate === null ? (
                      event.outcome
                    ) : (
                      <>
                        {event.outcome},{' '}
                        <Link href={`/analyses/${analysisId}#candidates`}>event {event.candidate}</Link>
                      </>
                    )}
                  </StateWord>
                  {event.failed.length > 0 ? <CellNote>{event.failed.join(' ')}</CellNote> : null}
                </Cell>
              </Row>
            ))}
          </tbody>
        </Table>
      )}
    </Section>
  );
}
