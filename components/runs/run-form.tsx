'use client';

import { useRouter } from 'next/navigation';
import { useMemo, useState, type FormEvent, type ReactNode } from 'react';
import { noticeRefusal } from '@/components/shell/session-ended';
import { Button } from '@/components/ui/button';
import { Checkbox } from '@/components/ui/choice';
import { Field, TextArea } from '@/components/ui/field';
import { useNotice } from '@/components/ui/notice';
import { ErrorState } from '@/components/ui/page-states';
import { Sheet } from '@/components/ui/sheet';
import type { FieldError } from '@/lib/errors';
import { fieldName } from '@/lib/run-form/fields';
import { readRunForm, runForm, withUnit, type RunForm as Typed } from '@/lib/run-form/run-form';
import type { ConditionName, RunConditionsInput } from '@/lib/schemas/conditions';
import { runCreateSchema, type RunCreate } from '@/lib/schemas/run';
import { suspiciousConditions } from '@/lib/suspicious-conditions';
import { splitTags } from '@/lib/tags';
import { deriveRun } from '@/tracking/flow/derive-run';
import { ConflictChoice, type StoredVersion } from './conflict-choice';
import { ConditionsFields } from './conditions-fields';
import { DerivedFold } from './derived-fold';
import { DerivedPanel } from './derived-panel';
import { RunNotes } from './run-notes';

/** What saving a run came to. */
export type SaveRunResult =
  | { ok: true; revision: number; href?: string }
  | {
      ok: false;
      code: string;
      detail: string;
      errors: FieldError[];
      /** What is stored now, when somebody else has changed the run meanwhile. */
      stored?: StoredVersion;
    };

interface RunFormProps {
  /** What stands above the form: title and tabs. */
  head: ReactNode;
  name: string;
  notes: string;
  tags: readonly string[];
  conditions: RunConditionsInput;
  /** Conditions that a file proposes where the run has none, and the file's name. */
  proposal?: { from: string; conditions: Partial<RunConditionsInput> } | null;
  revision: number | null;
  save: (run: RunCreate, revision: number | null) => Promise<SaveRunResult>;
  /** Called with the place to go once a new run exists. */
  submitLabel: string;
  /** Why this person can't save; the fields are then shown as they are. */
  readOnlyReason?: string | null;
}

/** Conditions of a run with their units, and what follows from them, beside each other. */
export function RunForm(props: RunFormProps) {
  const notify = useNotice();
  const router = useRouter();
  const [form, setForm] = useState<Typed>(() =>
    runForm({ ...props.conditions, ...props.proposal?.conditions }),
  );
  const [name, setName] = useState(props.name);
  const [notes, setNotes] = useState(props.notes);
  const [tags, setTags] = useState(props.tags.join(', '));
  const [revision, setRevision] = useState(props.revision);
  const [left, setLeft] = useState<ReadonlySet<string>>(new Set());
  const [confirmed, setConfirmed] = useState<readonly string[]>([]);
  const [fromServer, setFromServer] = useState<{ detail: string; errors: FieldError[] } | null>(null);
  const [stored, setStored] = useState<StoredVersion | null>(null);
  const [busy, setBusy] = useState(false);
  const readOnly = Boolean(props.readOnlyReason);

  const { conditions, errors } = useMemo(() => readRunForm(form, props.conditions), [form, props.conditions]);
  const derived = useMemo(() => deriveRun(conditions), [conditions]);
  const slips = useMemo(() => suspiciousConditions(conditions), [conditions]);

  const leave = (path: string) => setLeft((old) => new Set(old).add(path));
  const errorOf = (path: string) =>
    (left.has(path) && errors.find((error) => error.path === path)?.message) ||
    fromServer?.errors.find((error) => error.path === path)?.message ||
    (left.has(path) && slips.find((slip) => slip.path === path && !confirmed.includes(path))?.message) ||
    null;
  const warningOf = (path: string) => {
    const warning = derived.warnings.find(({ field, code }) => field === path && code !== 'GAMMA_UNVERIFIED');
    return warning && form.text[path as ConditionName] ? 'See the note.' : null;
  };
  const change = (part: Partial<Typed>) => {
    setFromServer(null);
    setForm((old) => ({ ...old, ...part }));
  };

  async function submit(event: FormEvent) {
    event.preventDefault();
    await saveOver(revision);
  }

  async function saveOver(over: number | null) {
    setLeft(new Set([...errors, ...slips].map(({ path }) => path).concat('name')));
    const run: RunCreate = {
      ...conditions,
      name,
      notes: notes.trim() || null,
      tags: splitTags(tags),
      ...(confirmed.length > 0 ? { confirm: [...confirmed] } : {}),
    };
    const checked = runCreateSchema.safeParse(run);
    if (errors.length > 0 || suspiciousConditions(conditions, confirmed).length > 0) return;
    if (!checked.success) {
      const found = checked.error.issues.map((issue) => ({
        path: issue.path.join('.'),
        message: issue.message,
      }));
      setFromServer({ detail: found[0].message, errors: found });
      return;
    }
    setBusy(true);
    setFromServer(null);
    try {
      const result = await props.save(checked.data, over);
      setStored((!result.ok && result.stored) || null);
      if (!result.ok) {
        noticeRefusal(result.code);
        setFromServer(result);
        return;
      }
      if (result.href) {
        router.push(result.href);
        router.refresh();
        return;
      }
      setRevision(result.revision);
      notify('Conditions saved.');
      router.refresh();
    } catch {
      setFromServer({ detail: 'The link to the server was lost. Nothing was saved; try again.', errors: [] });
    } finally {
      setBusy(false);
    }
  }

  const openSlips = slips.filter(({ path }) => left.has(path) || confirmed.includes(path));
  return (
    <Sheet margin={<RunNotes derived={derived} />} marginLabel="Warnings and cautions">
      {props.head}
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-9 gap-y-6 pt-5 desk:grid-cols-[minmax(0,1fr)_340px] wide:grid-cols-[minmax(0,1fr)_428px]">
        <form onSubmit={submit} noValidate aria-label="Conditions">
          <div className="grid grid-cols-1 gap-x-[14px] gap-y-3 pb-[18px] hand:grid-cols-2">
            <Field
              label="Name of the run"
              value={name}
              onChange={(event) => setName(event.target.value)}
              error={fromServer?.errors.find(({ path }) => path === 'name')?.message}
              disabled={readOnly}
            />
            <Field
              label="Tags"
              help="parted by commas"
              value={tags}
              onChange={(event) => setTags(event.target.value)}
              error={fromServer?.errors.find(({ path }) => path.startsWith('tags'))?.message}
              disabled={readOnly}
            />
          </div>
          <ConditionsFields
            form={form}
            change={change}
            onText={(field, text) => change({ text: { ...form.text, [field]: text } })}
            onUnit={(field, unit) => setForm((old) => withUnit(old, field, unit))}
            onLeave={leave}
            errorOf={errorOf}
            warningOf={warningOf}
            disabled={readOnly}
          />
          <TextArea
            label="Notes"
            value={notes}
            onChange={(event) => setNotes(event.target.value)}
            error={fromServer?.errors.find(({ path }) => path === 'notes')?.message}
            disabled={readOnly}
          />
          {openSlips.map(({ path }) => (
            <Checkbox
              key={path}
              className="pt-3"
              label={`${fieldName(path as ConditionName)} is meant as typed.`}
              checked={confirmed.includes(path)}
              onChange={(event) =>
                setConfirmed((old) =>
                  event.target.checked ? [...old, path] : old.filter((other) => other !== path),
                )
              }
            />
          ))}
          {props.proposal && !readOnly ? (
            <p className="pt-3 text-note text-amber-text">
              Taken from {props.proposal.from}, not saved yet:{' '}
              {Object.keys(props.proposal.conditions)
                .map((field) => fieldName(field as ConditionName).toLowerCase())
                .join(' and ')}
              . Check and save.
            </p>
          ) : null}
          {fromServer ? (
            <div className="pt-3">
              <ErrorState live what={fromServer.detail} />
            </div>
          ) : null}
          {stored ? (
            <ConflictChoice
              stored={stored}
              busy={busy}
              onMine={() => void saveOver(stored.revision)}
              onTheirs={() => window.location.reload()}
            />
          ) : null}
          {props.readOnlyReason ? (
            <p className="pt-4 text-note text-ink-3">{props.readOnlyReason}</p>
          ) : (
            <div className="pt-4">
              <Button type="submit" kind="main" busy={busy}>
                {props.submitLabel}
              </Button>
            </div>
          )}
        </form>
        <div className="max-desk:hidden">
          <DerivedPanel derived={derived} pixelSizeM={conditions.pixelSize_m ?? null} />
        </div>
        <DerivedFold derived={derived} pixelSizeM={conditions.pixelSize_m ?? null} />
      </div>
    </Sheet>
  );
}
