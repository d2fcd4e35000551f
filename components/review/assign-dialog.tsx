'use client';

import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { Segment, SelectField } from '@/components/ui/choice';
import { Dialog } from '@/components/ui/dialog';
import { Field, TextArea } from '@/components/ui/field';
import { useNotice } from '@/components/ui/notice';
import { ErrorState } from '@/components/ui/page-states';
import { countOf } from '@/lib/format/count';
import type { AssignmentInput } from '@/lib/schemas/review';
import type { PersonView } from '@/lib/views/common';
import type { ReviewSetView } from '@/lib/views/review-view';

interface AssignDialogProps {
  set: ReviewSetView;
  people: readonly PersonView[];
  give: (input: AssignmentInput) => Promise<{ ok: true } | { ok: false; detail: string }>;
}

/** Gives candidates of an analysis to a reader, with a day until which they should be judged. */
export function AssignDialog({ set, people, give }: AssignDialogProps) {
  const [open, setOpen] = useState(false);
  const [reader, setReader] = useState(people[0]?.id ?? '');
  const [which, setWhich] = useState<'all' | 'accepted'>('all');
  const [dueOn, setDueOn] = useState('');
  const [note, setNote] = useState('');
  const [busy, setBusy] = useState(false);
  const [problem, setProblem] = useState<string | null>(null);
  const notify = useNotice();

  async function submit() {
    setBusy(true);
    setProblem(null);
    try {
      const result = await give({
        analysis: set.analysisId,
        reader,
        which,
        dueOn: dueOn || null,
        note: note.trim() || null,
      });
      if (!result.ok) return setProblem(result.detail);
      setOpen(false);
      notify(
        `Given to ${people.find(({ id }) => id === reader)?.name ?? 'the reader'}, who is told by mail.`,
      );
    } catch {
      setProblem('The link to the server was lost. Nothing was given out; try again.');
    } finally {
      setBusy(false);
    }
  }

  return (
    <>
      <Button onClick={() => setOpen(true)}>
        Assign<span className="sr-only"> {set.recordingName}</span>
      </Button>
      <Dialog
        open={open}
        onClose={() => setOpen(false)}
        title={`Who judges ${set.recordingName}?`}
        actions={
          <>
            <Button kind="bare" onClick={() => setOpen(false)}>
              Leave it
            </Button>
            <Button kind="main" busy={busy} disabled={people.length === 0} onClick={() => void submit()}>
              Assign
            </Button>
          </>
        }
      >
        {people.length === 0 ? (
          <p>Nobody here may judge candidates. An administrator can make somebody an annotator.</p>
        ) : (
          <form
            className="flex flex-col gap-3 pt-2 text-left"
            noValidate
            onSubmit={(event) => {
              event.preventDefault();
              void submit();
            }}
          >
            <SelectField
              label="Reader"
              value={reader}
              onChange={(event) => setReader(event.target.value)}
              options={people.map(({ id, name }) => ({ value: id, label: name }))}
            />
            <Segment
              label="Candidates"
              showLabel
              options={[
                { value: 'all', label: `all, ${countOf(set.candidates, 'candidate')}` },
                { value: 'accepted', label: `accepted, ${set.accepted}`, disabled: set.accepted === 0 },
              ]}
              value={which}
              onChange={setWhich}
            />
            <Field
              label="Due on"
              type="date"
              help="can be left open"
              value={dueOn}
              onChange={(event) => setDueOn(event.target.value)}
            />
            <TextArea label="Note" rows={2} value={note} onChange={(event) => setNote(event.target.value)} />
            {problem ? <ErrorState live what={problem} /> : null}
            <button type="submit" hidden />
          </form>
        )}
      </Dialog>
    </>
  );
}
