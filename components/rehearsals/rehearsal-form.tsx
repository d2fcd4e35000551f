'use client';

import { useRouter } from 'next/navigation';
import { useMemo, useState, type FormEvent } from 'react';
import { RecipeFields } from '@/components/analyses/recipe-fields';
import { useRecipeForm } from '@/components/analyses/use-recipe-form';
import { ApiError } from '@/components/data/api-client';
import { ConditionsFields } from '@/components/runs/conditions-fields';
import { DerivedFold } from '@/components/runs/derived-fold';
import { DerivedPanel } from '@/components/runs/derived-panel';
import { RunNotes } from '@/components/runs/run-notes';
import { Button } from '@/components/ui/button';
import { Segment, SelectField } from '@/components/ui/choice';
import { Field } from '@/components/ui/field';
import { Fold } from '@/components/ui/fold';
import { MarginNote } from '@/components/ui/margin-note';
import { Moment } from '@/components/ui/moment';
import { ErrorState } from '@/components/ui/page-states';
import { PageTitle, Sheet } from '@/components/ui/sheet';
import { StateWord } from '@/components/ui/state-bead';
import type { FieldError } from '@/lib/errors';
import { draftOf, readRehearsalForm, rehearsalForm, type RehearsalForm as Typed } from '@/lib/rehearsal-form/rehearsal-form'; // prettier-ignore
import { runForm, withUnit, type RunForm } from '@/lib/run-form/run-form';
import type { ConditionName, RunConditionsInput } from '@/lib/schemas/conditions';
import type { RehearsalCreate, RehearsalDraft } from '@/lib/schemas/rehearsal';
import { deriveRun } from '@/tracking/flow/derive-run';
import type { RecipeRequest } from '@/tracking/types';
import { PlanFields } from './plan-fields';
import { useDraft } from './use-draft';

/** What asking for a rehearsal came to. */
export type SaveRehearsalResult = { ok: true; href: string } | { ok: false; detail: string; errors: FieldError[] }; // prettier-ignore

interface RehearsalFormProps {
  initial: Typed;
  recipe: RecipeRequest;
  draftAt: string | null;
  runs: readonly { id: string; name: string; conditions: RunConditionsInput }[];
  recordings: readonly { id: string; name: string }[];
  save: (request: RehearsalCreate) => Promise<SaveRehearsalResult>;
  keepDraft: (draft: RehearsalDraft) => Promise<boolean>;
  forgetDraft: () => Promise<boolean>;
}

const KINDS = [
  { value: 'simulated', label: 'Simulate planned conditions' },
  { value: 'planted', label: 'Plant in a recording' },
] as const;

/** The plan of a rehearsal: conditions, what is in sight, camera, and the recipe that is tried on it. */
export function RehearsalForm(props: RehearsalFormProps) {
  const router = useRouter();
  const [form, setForm] = useState<Typed>(props.initial);
  const recipe = useRecipeForm(props.recipe);
  const [left, setLeft] = useState<ReadonlySet<string>>(new Set());
  const [fromServer, setFromServer] = useState<{ detail: string; errors: FieldError[] } | null>(null);
  const [busy, setBusy] = useState(false);
  const [recipeOpen, setRecipeOpen] = useState(false);
  const draft = useDraft(draftOf(form, recipe.texts), props.keepDraft);

  const planted = form.kind === 'planted';
  const { request, conditions, errors } = useMemo(() => readRehearsalForm(form), [form]);
  const derived = useMemo(() => deriveRun(conditions), [conditions]);
  const spacing = derived.values.expectedSpacing_m;
  const expectedDensity = spacing === null ? null : String(Number((1e-6 / spacing ** 2).toPrecision(3)));

  const change = (part: Partial<Typed>) => {
    setFromServer(null);
    setForm((old) => ({ ...old, ...part }));
  };
  const changeConditions = (part: Partial<RunForm>) =>
    change({ conditions: { ...form.conditions, ...part } });
  const leave = (path: string) => setLeft((old) => new Set(old).add(path));
  const errorOf = (path: string) =>
    (left.has(path) && errors.find((error) => error.path === path)?.message) ||
    fromServer?.errors.find((error) => error.path === path || error.path === `conditions.${path}`)?.message ||
    null;

  async function submit(event: FormEvent) {
    event.preventDefault();
    setLeft(new Set(errors.map(({ path }) => path)));
    if (errors.length > 0) {
      setFromServer({ detail: errors[0].message, errors: [] });
      return;
    }
    if (!recipe.recipe) {
      setRecipeOpen(true);
      return;
    }
    setBusy(true);
    setFromServer(null);
    try {
      const result = await props.save({ ...request, recipe: recipe.recipe });
      if (result.ok) {
        router.push(result.href);
        return;
      }
      setFromServer(result);
      if (result.errors.some(({ path }) => path.startsWith('recipe.'))) {
        recipe.refuse(new ApiError(422, 'PARAM_RANGE', result.detail, result.errors));
        setRecipeOpen(true);
      }
    } catch {
      setFromServer({
        detail: 'The link to the server was lost. Nothing was started; try again.',
        errors: [],
      });
    } finally {
      setBusy(false);
    }
  }

  const notes = (
    <>
      {props.draftAt && draft === 'untouched' ? (
        <MarginNote title="Your draft">
          Kept <Moment at={props.draftAt} />.{' '}
          <button
            type="button"
            className="underline decoration-violet decoration-[1.5px] underline-offset-[3px] hover:text-violet-text"
            onClick={() => {
              void props.forgetDraft();
              setForm(rehearsalForm());
            }}
          >
            Start from the usual values
          </button>
        </MarginNote>
      ) : null}
      <MarginNote title="What is simulated">
        Lines through a box that drift with the superfluid and wobble, tracers along them, free tracers in a
        channel flow, pairs that meet and part, a camera with its noise and open shutter. Gravity is left out.
      </MarginNote>
      <MarginNote title="How much">At most 500 million pixels and 4 million tracer images in all.</MarginNote>
      {planted ? null : <RunNotes derived={derived} />}
    </>
  );
  return (
    <Sheet margin={notes} marginLabel="Warnings and what is simulated">
      <PageTitle state={<StateWord state="waiting">{draftWords(draft)}</StateWord>}>New rehearsal</PageTitle>
      <div
        className={
          planted
            ? 'max-w-[720px]'
            : 'grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-6 desk:grid-cols-[minmax(0,1fr)_340px] wide:grid-cols-[minmax(0,1fr)_428px]'
        }
      >
        <form onSubmit={submit} noValidate aria-label="Rehearsal">
          <div className="pb-4">
            <Segment
              label="What is rehearsed"
              options={KINDS}
              value={form.kind}
              onChange={(kind) => change({ kind })}
            />
          </div>
          <div className="grid grid-cols-1 gap-x-[14px] gap-y-3 pb-[18px] hand:grid-cols-2">
            <Field
              label="Name of the rehearsal"
              value={form.name}
              onChange={(event) => change({ name: event.target.value })}
              onBlur={() => leave('name')}
              error={errorOf('name')}
            />
            {planted ? (
              <SelectField
                label="Recording"
                options={[
                  { value: '', label: props.recordings.length > 0 ? 'choose one' : 'no recording is ready' },
                  ...props.recordings.map(({ id, name }) => ({ value: id, label: name })),
                ]}
                value={form.recordingId}
                onChange={(event) => change({ recordingId: event.target.value })}
                onBlur={() => leave('recordingId')}
                error={errorOf('recordingId')}
              />
            ) : (
              <SelectField
                label="Conditions of a run"
                help="fills the fields below"
                options={[
                  { value: '', label: 'as typed below' },
                  ...props.runs.map(({ id, name }) => ({ value: id, label: name })),
                ]}
                defaultValue=""
                onChange={(event) => {
                  const run = props.runs.find(({ id }) => id === event.target.value);
                  if (run) change({ conditions: runForm(run.conditions) });
                }}
              />
            )}
          </div>
          <PlanFields
            form={form}
            change={change}
            onLeave={leave}
            errorOf={errorOf}
            expectedDensity={planted ? 'of its run' : expectedDensity}
          />
          {planted ? null : (
            <ConditionsFields
              form={form.conditions}
              change={changeConditions}
              onText={(field: ConditionName, text) =>
                changeConditions({ text: { ...form.conditions.text, [field]: text } })
              }
              onUnit={(field, unit) => change({ conditions: withUnit(form.conditions, field, unit) })}
              onLeave={leave}
              errorOf={errorOf}
              warningOf={() => null}
              disabled={false}
              asksTracersPerArea={false}
            />
          )}
          <Fold title="Recipe of the analysis" open={recipeOpen} onOpen={setRecipeOpen}>
            <div className="pt-2">
              <RecipeFields
                texts={recipe.texts}
                errors={recipe.errors}
                onText={recipe.setText}
                columns="grid-cols-2 hand:grid-cols-4"
              />
            </div>
          </Fold>
          {fromServer ? (
            <div className="pt-3">
              <ErrorState live what="The rehearsal did not start.">
                {fromServer.detail}
              </ErrorState>
            </div>
          ) : null}
          <div className="pt-4">
            <Button type="submit" kind="main" busy={busy}>
              Start the rehearsal
            </Button>
          </div>
        </form>
        {planted ? null : (
          <div className="max-desk:hidden">
            <DerivedPanel derived={derived} pixelSizeM={conditions.pixelSize_m ?? null} />
          </div>
        )}
        {planted ? null : <DerivedFold derived={derived} pixelSizeM={conditions.pixelSize_m ?? null} />}
      </div>
    </Sheet>
  );
}

const draftWords = (draft: ReturnType<typeof useDraft>): string =>
  draft === 'kept' ? 'draft kept' : draft === 'not kept' ? 'draft could not be kept' : 'not started yet';
