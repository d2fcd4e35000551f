'use client';

import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { Field } from '@/components/ui/field';
import { useNotice } from '@/components/ui/notice';
import { ErrorState } from '@/components/ui/page-states';
import {
  REVIEW_ACTIONS,
  reviewKeysSchema,
  type ReviewAction,
  type ReviewKeys,
} from '@/lib/review/review-keys';

interface ReviewKeysFormProps {
  keys: ReviewKeys;
  save: (keys: Partial<ReviewKeys>) => Promise<{ ok: true } | { ok: false; detail: string }>;
}

const ACTIONS = Object.keys(REVIEW_ACTIONS) as ReviewAction[];
const usual = () => Object.fromEntries(ACTIONS.map((action) => [action, REVIEW_ACTIONS[action].key])) as ReviewKeys; // prettier-ignore

/** Which key does what on the review desk. */
export function ReviewKeysForm({ keys, save }: ReviewKeysFormProps) {
  const [chosen, setChosen] = useState<ReviewKeys>(keys);
  const [errors, setErrors] = useState<Partial<Record<string, string>>>({});
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const notify = useNotice();

  async function submit() {
    const checked = reviewKeysSchema.safeParse(chosen);
    setProblem(null);
    if (!checked.success) {
      setErrors(
        Object.fromEntries(checked.error.issues.map(({ path, message }) => [String(path[0]), message])),
      );
      return;
    }
    setErrors({});
    setBusy(true);
    try {
      const result = await save(checked.data);
      if (result.ok) notify('The keys are kept.');
      else setProblem(result.detail);
    } catch {
      setProblem('The link to the server was lost. Nothing was saved; try again.');
    } finally {
      setBusy(false);
    }
  }

  return (
    <form
      className="max-w-[720px] pt-2"
      noValidate
      onSubmit={(event) => {
        event.preventDefault();
        void submit();
      }}
    >
      <div className="grid grid-cols-1 gap-x-6 gap-y-3 hand:grid-cols-2">
        {ACTIONS.map((action) => (
          <Field
            key={action}
            label={REVIEW_ACTIONS[action].words}
            value={chosen[action]}
            maxLength={1}
            autoComplete="off"
            error={errors[action]}
            onChange={(event) => setChosen({ ...chosen, [action]: event.target.value.toLowerCase() })}
          />
        ))}
      </div>
      <p className="pt-2 text-note text-ink-2">
        The arrow keys step through the frames. Keys rest while you write.
      </p>
      {problem ? <ErrorState live what={problem} /> : null}
      <div className="flex gap-2 pt-3">
        <Button type="submit" busy={busy}>
          Keep these keys
        </Button>
        <Button kind="bare" onClick={() => setChosen(usual())}>
          The usual ones
        </Button>
      </div>
    </form>
  );
}
