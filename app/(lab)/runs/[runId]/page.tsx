import type { Metadata } from 'next';
import { mayTo } from '@/auth/viewer';
import { RunForm } from '@/components/runs/run-form';
import { PathThread } from '@/components/ui/path-thread';
import { whoMay } from '@/lib/access';
import { conditionsOfView } from '@/lib/run-form/conditions-of-view';
import { runProposal } from '@/models/queries/run-proposal';
import { pathLevels } from '../../path-levels';
import { editRun } from '../actions';
import { loadRun } from './load-run';
import { RunHead } from './run-head';

interface Props {
  params: Promise<{ runId: string }>;
}

export async function generateMetadata({ params }: Props): Promise<Metadata> {
  return { title: (await loadRun((await params).runId)).run.name };
}

export default async function RunPage({ params }: Props) {
  const loaded = await loadRun((await params).runId);
  const { viewer, run, campaign } = loaded;
  const conditions = conditionsOfView(run);
  const proposed = await runProposal(viewer.labId, run.id);
  const open = (['pixelSize_m', 'frameInterval_s'] as const).flatMap((field) =>
    proposed?.[field] && conditions[field] === null ? [[field, proposed[field]] as const] : [],
  );
  const mine = mayTo(viewer, 'edit-run', [run.createdBy?.id ?? null]);
  return (
    <>
      <PathThread levels={pathLevels(viewer, { campaign, run })} />
      <RunForm
        key={run.revision}
        head={<RunHead loaded={loaded} tab="conditions" />}
        name={run.name}
        notes={run.notes ?? ''}
        tags={run.tags}
        conditions={conditions}
        proposal={
          proposed && open.length > 0 ? { from: proposed.from, conditions: Object.fromEntries(open) } : null
        }
        revision={run.revision}
        save={editRun.bind(null, run.id)}
        submitLabel="Save conditions"
        readOnlyReason={
          mine ? null : `These conditions can be changed by whoever made the run: ${whoMay('edit-run')}.`
        }
      />
    </>
  );
}
