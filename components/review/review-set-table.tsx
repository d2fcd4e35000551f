import Link from 'next/link';
import { EmptyState } from '@/components/ui/page-states';
import { ProgressThread } from '@/components/ui/progress-thread';
import { StateWord } from '@/components/ui/state-bead';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { filledBeads } from '@/components/ui/thread-beads';
import { countOf, formatCount } from '@/lib/format/count';
import type { AssignmentInput } from '@/lib/schemas/review';
import type { PersonView } from '@/lib/views/common';
import type { ReviewSetView } from '@/lib/views/review-view';
import { AssignDialog } from './assign-dialog';

const BEADS = 20;

interface ReviewSetTableProps {
  sets: readonly ReviewSetView[];
  judges: boolean;
  settles: boolean;
  people: readonly PersonView[];
  give: ((input: AssignmentInput) => Promise<{ ok: true } | { ok: false; detail: string }>) | null;
}

/** Analyses with candidates: to a reader what is theirs, to others how far all readings are. */
export function ReviewSetTable({ sets, judges, settles, people, give }: ReviewSetTableProps) {
  if (sets.length === 0) {
    return (
      <EmptyState>No analysis has candidates yet: pairs of trapped tracers that met and parted.</EmptyState>
    );
  }
  return (
    <Table label="Analyses with candidates">
      <thead>
        <tr>
          <HeadCell>Recording</HeadCell>
          <HeadCell narrow="hide">Campaign</HeadCell>
          <HeadCell numeric narrow="hide">
            Candidates
          </HeadCell>
          <HeadCell numeric narrow="hide">
            People each
          </HeadCell>
          <HeadCell>Judged</HeadCell>
          <HeadCell numeric narrow="hide">
            Events
          </HeadCell>
          <HeadCell silent>What to do</HeadCell>
        </tr>
      </thead>
      <tbody>
        {sets.map((set) => {
          const judged = set.progress?.judged ?? set.own;
          const words = `${formatCount(judged)} of ${formatCount(set.candidates)}`;
          const beads = Math.min(set.candidates, BEADS);
          const filled = set.candidates <= BEADS ? judged : filledBeads(judged / set.candidates, beads);
          return (
            <Row key={set.analysisId}>
              <Cell head>
                <Link href={`/analyses/${set.analysisId}`}>{set.recordingName}</Link>
                <CellNote>{set.runName}</CellNote>
              </Cell>
              <Cell narrow="hide">
                <Link href={`/campaigns/${set.campaignId}`}>{set.campaignName}</Link>
              </Cell>
              <Cell numeric narrow="hide">
                {formatCount(set.candidates)}
                <CellNote>{formatCount(set.accepted)} accepted</CellNote>
              </Cell>
              <Cell numeric narrow="hide">
                {set.readings}
              </Cell>
              <Cell>
                <span className="whitespace-nowrap text-note tabular-nums">
                  {words}
                  {set.progress && set.progress.disagreed > 0
                    ? `, ${countOf(set.progress.disagreed, 'disagreement')}`
                    : ''}
                </span>
                <ProgressThread stages={[{ beads, filled }]} label={`${words} judged`} />
              </Cell>
              <Cell numeric narrow="hide">
                {set.progress ? (
                  formatCount(set.progress.events)
                ) : (
                  <span className="text-ink-3">kept from you</span>
                )}
              </Cell>
              <Cell numeric>
                <span className="inline-flex flex-wrap items-center justify-end gap-x-3 gap-y-1">
                  {set.signedOff ? <StateWord state="signed">signed off</StateWord> : null}
                  {judges ? (
                    <Link href={`/review/${set.analysisId}`}>
                      {set.waiting > 0 ? `Judge ${formatCount(set.waiting)}` : 'Look again'}
                      <span className="sr-only"> of {set.recordingName}</span>
                    </Link>
                  ) : null}
                  {settles && set.progress && set.progress.disagreed > 0 ? (
                    <Link href={`/review/${set.analysisId}/settle`}>
                      Settle<span className="sr-only"> {set.recordingName}</span>
                    </Link>
                  ) : null}
                  {give && !set.signedOff ? <AssignDialog set={set} people={people} give={give} /> : null}
                </span>
              </Cell>
            </Row>
          );
        })}
      </tbody>
    </Table>
  );
}
