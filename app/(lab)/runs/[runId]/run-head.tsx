import { may } from '@/auth/viewer';
import { Moment } from '@/components/ui/moment';
import { PageTitle } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import { TabLinks } from '@/components/ui/tabs';
import { TagList } from '@/components/ui/tag-list';
import type { loadRun } from './load-run';

type Loaded = Awaited<ReturnType<typeof loadRun>>;

/** Title of a run and the way between its parts. */
export function RunHead({ loaded, tab }: { loaded: Loaded; tab: 'conditions' | 'recordings' | 'analyses' }) {
  const { viewer, run } = loaded;
  const path = `/runs/${run.id}`;
  const tabs = [
    { href: path, label: 'Conditions', current: tab === 'conditions' },
    { href: `${path}/recordings`, label: 'Recordings', current: tab === 'recordings', count: run.recordings },
    ...(may(viewer, 'see-data')
      ? [{ href: `${path}/analyses`, label: 'Analyses', current: tab === 'analyses' }]
      : []),
  ];
  return (
    <>
      <PageTitle
        state={
          run.recordings === 0 ? (
            <StateWord state="waiting">planned</StateWord>
          ) : (
            <StateWord state="done">recorded</StateWord>
          )
        }
        aside={
          <>
            saved <Moment at={run.updatedAt} />
            {run.createdBy ? `, made by ${run.createdBy.name}` : null}
          </>
        }
      >
        {run.name}
      </PageTitle>
      <TagList tags={run.tags} />
      <TabLinks label="Parts of this run" tabs={tabs} />
    </>
  );
}
