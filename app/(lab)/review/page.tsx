import type { Metadata } from 'next';
import { requireViewer } from '@/auth/page';
import { may } from '@/auth/viewer';
import { sightOf } from '@/app/api/operations/review';
import { AssignmentTable } from '@/components/review/assignment-table';
import { DisagreementTable } from '@/components/review/disagreement-table';
import { ReaderTable } from '@/components/review/reader-table';
import { ReviewSentence } from '@/components/review/review-sentence';
import { ReviewSetTable } from '@/components/review/review-set-table';
import { PathThread } from '@/components/ui/path-thread';
import { MarginNote } from '@/components/ui/margin-note';
import { Lede, Section, Sheet } from '@/components/ui/sheet';
import { countOf } from '@/lib/format/count';
import { REVIEW_ORDER_WORDS } from '@/lib/review/review-order';
import { listAssignments, listReaders } from '@/models/queries/assignments';
import { listDisagreements } from '@/models/queries/disagreements';
import { listReaderStatistics } from '@/models/queries/reader-statistics';
import { listReviewSets } from '@/models/queries/review-sets';
import { pathLevels } from '../path-levels';
import { giveCandidates, takeBackCandidates } from './actions';

export const metadata: Metadata = { title: 'Review' };

const MOST = 200;

export default async function ReviewPage() {
  const viewer = await requireViewer('see-review', '/review');
  const { labId, userId } = viewer;
  const sight = sightOf(viewer);
  const [judges, settles, assigns] = [
    may(viewer, 'review'),
    may(viewer, 'settle'),
    may(viewer, 'assign-review'),
  ];
  const onlyOwn = sight.seesOutcomes ? null : userId;
  const [sets, assignments, disagreements, readers, people] = await Promise.all([
    listReviewSets(labId, { sort: '-finishedAt', limit: MOST }, sight),
    listAssignments(labId, onlyOwn, { sort: 'dueOn', limit: MOST, whose: 'all', state: 'open' }),
    settles ? listDisagreements(labId, { sort: '-createdAt', limit: MOST }) : null,
    listReaderStatistics(labId, onlyOwn, { sort: 'name', limit: MOST }),
    assigns ? listReaders(labId) : [],
  ]);
  const given = assignments.items.filter(({ reader }) => onlyOwn === null || reader.id === userId);
  const margin = (
    <>
      {judges ? <MarginNote title="The order">{REVIEW_ORDER_WORDS}</MarginNote> : null}
      <MarginNote title="Kappa">
        Cohen’s kappa (1960): agreement beyond chance, 1 for always, 0 for no more than chance; in brackets
        the interval of 95 % of Fleiss, Cohen and Everitt (1969), which is too narrow for few candidates. Only
        verdicts that were given blind count. Against settled: what the principal investigator settled, mostly
        what readers disagree on; where they agree, a reader would be compared with themselves.
      </MarginNote>
      <MarginNote title="Known truth">
        A campaign can mix candidates of rehearsals among those to judge; the desk says how many. Their truth
        is known, so they tell how often a reader is right. They count in no result and in no other number
        here.
      </MarginNote>
      <MarginNote title="What becomes an event">
        A candidate that its readers agree on, or that the principal investigator settled, with “yes”.
      </MarginNote>
    </>
  );
  return (
    <>
      <PathThread levels={[...pathLevels(viewer), { kind: 'Desk', name: 'Review', href: '/review' }]} />
      <Sheet margin={margin} marginLabel="Notes">
        <h1 className="sr-only">Review</h1>
        <Lede>
          <ReviewSentence
            judges={judges}
            waiting={sets.items.reduce((sum, set) => sum + set.waiting, 0)}
            first={sets.items.find(({ waiting }) => waiting > 0) ?? null}
            disagreed={disagreements?.items.length ?? 0}
          />
        </Lede>
        {disagreements && disagreements.items.length > 0 ? (
          <Section
            id="disagreements"
            title="Disagreements"
            count={`${countOf(disagreements.items.length, 'candidate')} to settle`}
          >
            <DisagreementTable items={disagreements.items} />
          </Section>
        ) : null}
        {given.length > 0 ? (
          <Section
            id="assigned"
            title={judges && onlyOwn ? 'Given to you' : 'Given out'}
            count="the soonest due first"
          >
            <AssignmentTable items={given} userId={userId} takeBack={assigns ? takeBackCandidates : null} />
          </Section>
        ) : null}
        <Section title="Analyses with candidates" count="newest first">
          <ReviewSetTable
            sets={sets.items}
            judges={judges}
            settles={settles}
            people={people}
            give={assigns ? giveCandidates : null}
          />
        </Section>
        <Section
          title="Readers"
          count={onlyOwn ? 'you, against what was settled' : 'against what was settled, and each other'}
        >
          <ReaderTable readers={readers.items} />
        </Section>
      </Sheet>
    </>
  );
}
