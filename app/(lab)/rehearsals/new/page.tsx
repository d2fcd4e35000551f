import type { Metadata } from 'next';
import { requireViewer } from '@/auth/page';
import { readRecipe, recipeTexts } from '@/components/analyses/recipe-form-values';
import { RehearsalForm } from '@/components/rehearsals/rehearsal-form';
import { PathThread } from '@/components/ui/path-thread';
import { isId } from '@/lib/ids';
import { formOfDraft, recipeOfDraft, rehearsalForm } from '@/lib/rehearsal-form/rehearsal-form';
import { conditionsOfView } from '@/lib/run-form/conditions-of-view';
import { readDraft } from '@/models/queries/rehearsal-drafts';
import { plantableRecordings, plannedRuns } from '@/models/queries/rehearsal-choices';
import { getRehearsal } from '@/models/queries/rehearsals';
import { getRecording } from '@/models/queries/recordings';
import { getRun } from '@/models/queries/runs';
import type { RehearsalPlan } from '@/tracking/rehearsal/plan';
import type { RecipeRequest } from '@/tracking/types';
import { found } from '../../found';
import { pathLevels } from '../../path-levels';
import { addRehearsal, forgetDraft, keepDraft } from '../actions';

export const metadata: Metadata = { title: 'New rehearsal' };

interface Props {
  searchParams: Promise<Record<string, string | string[] | undefined>>;
}

export default async function NewRehearsalPage({ searchParams }: Props) {
  const viewer = await requireViewer('make-rehearsal', '/rehearsals/new');
  const query = await searchParams;
  const idIn = (name: string) => {
    const value = query[name];
    return typeof value === 'string' && isId(value) ? value : null;
  };
  const [runs, recordings] = await Promise.all([
    plannedRuns(viewer.labId),
    plantableRecordings(viewer.labId),
  ]);
  const start = await startOf(viewer, { from: idIn('from'), run: idIn('run'), recording: idIn('recording') });
  return (
    <>
      <PathThread
        levels={[
          ...pathLevels(viewer),
          { kind: 'Rehearsal', name: 'New rehearsal', href: '/rehearsals/new' },
        ]}
      />
      <RehearsalForm
        {...start}
        runs={runs}
        recordings={recordings}
        save={addRehearsal}
        keepDraft={keepDraft}
        forgetDraft={forgetDraft}
      />
    </>
  );
}

interface Start {
  initial: ReturnType<typeof rehearsalForm>;
  recipe: RecipeRequest;
  /** When the draft that fills the form was kept; null for none. */
  draftAt: string | null;
}

/** What the form begins with: an earlier rehearsal, a run, a recording, what was typed before, or the usual values. */
async function startOf(
  viewer: Awaited<ReturnType<typeof requireViewer>>,
  ids: { from: string | null; run: string | null; recording: string | null },
): Promise<Start> {
  const { labId, userId } = viewer;
  if (ids.from) {
    const { name, kind, plan, recipe, source } = await found(ids.from, (id) => getRehearsal(labId, id));
    const initial = rehearsalForm({
      name: `${name}, again`.slice(0, 200),
      kind,
      recordingId: source?.recordingId,
      plan: plan as unknown as RehearsalPlan,
    });
    return { initial, recipe: recipe as RecipeRequest, draftAt: null };
  }
  if (ids.run) {
    const run = await found(ids.run, (id) => getRun(labId, id));
    const initial = rehearsalForm({ name: `${run.name}, rehearsed`, conditions: conditionsOfView(run) });
    return { initial, recipe: {}, draftAt: null };
  }
  if (ids.recording) {
    const { id, name } = await found(ids.recording, (known) => getRecording(labId, known));
    const initial = rehearsalForm({ name: `Planted in ${name}`.slice(0, 200), kind: 'planted', recordingId: id }); // prettier-ignore
    return { initial, recipe: {}, draftAt: null };
  }
  const draft = await readDraft(labId, userId);
  if (draft) {
    const texts = { ...recipeTexts({}), ...recipeOfDraft(draft.form) };
    const recipe = readRecipe(texts).recipe ?? {};
    return { initial: formOfDraft(draft.form), recipe, draftAt: draft.updatedAt };
  }
  return { initial: rehearsalForm(), recipe: {}, draftAt: null };
}
