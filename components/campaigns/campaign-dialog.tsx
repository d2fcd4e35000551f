'use client';

import { useRouter } from 'next/navigation';
import { useState } from 'react';
import { noticeRefusal } from '@/components/shell/session-ended';
import { Button } from '@/components/ui/button';
import { Segment } from '@/components/ui/choice';
import { Dialog } from '@/components/ui/dialog';
import { Field, TextArea } from '@/components/ui/field';
import { ErrorState } from '@/components/ui/page-states';
import type { FieldError } from '@/lib/errors';
import { campaignCreateSchema, type CampaignCreate } from '@/lib/schemas/campaign';
import { splitTags } from '@/lib/tags';

export type SaveCampaignResult =
  { ok: true; id: string } | { ok: false; code: string; detail: string; errors: FieldError[] };

interface CampaignDialogProps {
  /** The button that opens it. */
  label: string;
  kind?: 'main' | 'outlined';
  title: string;
  submitLabel: string;
  initial?: {
    name: string;
    description: string | null;
    tags: readonly string[];
    readings: number;
    knownCandidates: number;
  };
  save: (campaign: CampaignCreate) => Promise<SaveCampaignResult>;
}

/** Makes a campaign or edits one; on success it leads to the campaign. */
export function CampaignDialog({
  label,
  kind = 'main',
  title,
  submitLabel,
  initial,
  save,
}: CampaignDialogProps) {
  const router = useRouter();
  const [open, setOpen] = useState(false);
  const [readings, setReadings] = useState(String(initial?.readings ?? 1));
  const [known, setKnown] = useState(String(initial?.knownCandidates ?? 0));
  const [busy, setBusy] = useState(false);
  const [name, setName] = useState(initial?.name ?? '');
  const [description, setDescription] = useState(initial?.description ?? '');
  const [tags, setTags] = useState(initial?.tags.join(', ') ?? '');
  const [problem, setProblem] = useState<{ detail: string; errors: FieldError[] } | null>(null);
  const errorAt = (path: string) =>
    problem?.errors.find((error) => error.path.split('.')[0] === path)?.message;

  async function submit() {
    const checked = campaignCreateSchema.safeParse({
      name,
      description: description.trim() || null,
      tags: splitTags(tags),
      readings: Number(readings),
      knownCandidates: known.trim() === '' ? 0 : Number(known),
    });
    if (!checked.success) {
      const errors = checked.error.issues.map(({ path, message }) => ({ path: path.join('.'), message }));
      setProblem({ detail: errors[0].message, errors });
      return;
    }
    setBusy(true);
    setProblem(null);
    try {
      const result = await save(checked.data);
      if (!result.ok) {
        noticeRefusal(result.code);
        setProblem(result);
        return;
      }
      setOpen(false);
      router.push(`/campaigns/${result.id}`);
      router.refresh();
    } catch {
      setProblem({ detail: 'The link to the server was lost. Nothing was saved; try again.', errors: [] });
    } finally {
      setBusy(false);
    }
  }

  return (
    <>
      <Button kind={kind} onClick={() => setOpen(true)}>
        {label}
      </Button>
      <Dialog
        open={open}
        onClose={() => setOpen(false)}
        title={title}
        actions={
          <>
            <Button kind="bare" onClick={() => setOpen(false)}>
              Leave it
            </Button>
            <Button kind="main" busy={busy} onClick={() => void submit()}>
              {submitLabel}
            </Button>
          </>
        }
      >
        <form
          className="flex flex-col gap-3 pt-2"
          noValidate
          onSubmit={(event) => {
            event.preventDefault();
            void submit();
          }}
        >
          <Field
            label="Name"
            value={name}
            onChange={(event) => setName(event.target.value)}
            error={errorAt('name')}
            autoFocus
          />
          <TextArea
            label="Description"
            value={description}
            onChange={(event) => setDescription(event.target.value)}
            error={errorAt('description')}
          />
          <Field
            label="Tags"
            help="parted by commas"
            value={tags}
            onChange={(event) => setTags(event.target.value)}
            error={errorAt('tags')}
          />
          <Segment
            label="People who judge each reconnection candidate"
            showLabel
            options={[
              { value: '1', label: 'one' },
              { value: '2', label: 'two, blind' },
              { value: '3', label: 'three, blind' },
            ]}
            value={readings}
            onChange={setReadings}
          />
          <Field
            label="Known candidates mixed in, per analysis and reader"
            help="from rehearsals, to measure readers; 0 to 20, never counted in results"
            inputMode="numeric"
            value={known}
            onChange={(event) => setKnown(event.target.value)}
            error={errorAt('knownCandidates')}
          />
          {problem && !['name', 'description', 'tags', 'knownCandidates'].some(errorAt) ? (
            <ErrorState live what={problem.detail} />
          ) : null}
          <button type="submit" hidden />
        </form>
      </Dialog>
    </>
  );
}
