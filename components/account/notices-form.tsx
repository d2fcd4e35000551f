'use client';

import { useState } from 'react';
import { Checkbox } from '@/components/ui/choice';
import { useNotice } from '@/components/ui/notice';
import { ErrorState } from '@/components/ui/page-states';
import { NOTICE_KINDS, NOTICE_WORDS, type NoticeKind } from '@/lib/mail/mail-kinds';

interface NoticesFormProps {
  off: readonly NoticeKind[];
  save: (off: NoticeKind[]) => Promise<{ ok: true } | { ok: false; detail: string }>;
}

/** Which notices come by mail; each choice is kept at once. */
export function NoticesForm({ off, save }: NoticesFormProps) {
  const [without, setWithout] = useState(off);
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  const notify = useNotice();

  async function choose(kind: NoticeKind, wanted: boolean) {
    const before = without;
    const next = wanted ? without.filter((other) => other !== kind) : [...without, kind];
    setWithout(next);
    setBusy(true);
    setProblem(null);
    try {
      const result = await save(next);
      if (!result.ok) throw new Error(result.detail);
      notify('Your choice is kept.');
    } catch (error) {
      setWithout(before);
      setProblem(error instanceof Error ? error.message : 'The choice could not be kept.');
    } finally {
      setBusy(false);
    }
  }

  return (
    <fieldset className="flex flex-col gap-1 pt-2" disabled={busy}>
      <legend className="sr-only">Notices by mail</legend>
      {NOTICE_KINDS.map((kind) => (
        <Checkbox
          key={kind}
          label={NOTICE_WORDS[kind]}
          checked={!without.includes(kind)}
          onChange={(event) => void choose(kind, event.target.checked)}
        />
      ))}
      <p className="pt-1 text-note text-ink-2">
        Mail about your account itself, as when its password was changed, always comes.
      </p>
      {problem ? <ErrorState live what={problem} /> : null}
    </fieldset>
  );
}
