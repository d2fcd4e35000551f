'use client';

import { useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { api } from '@/components/data/api-client';
import { useAct } from '@/components/data/use-act';
import { Button } from '@/components/ui/button';
import { Dialog } from '@/components/ui/dialog';
import { TextArea } from '@/components/ui/field';
import type { ComparedRun } from '@/lib/views/compare-view';

/** Leaves a run out of fits with a reason, or takes it in again; both stand in the audit trail. */
export function LeaveOutDialog({ run, onClose }: { run: ComparedRun; onClose: () => void }) {
  const client = useQueryClient();
  const [reason, setReason] = useState('');
  const { busy, problem, act } = useAct();
  const { exclusion } = run;
  async function change() {
    const path = `/api/v1/runs/${run.runId}/exclusion`;
    await (exclusion ? api(path, { method: 'DELETE' }) : api(path, { method: 'PUT', body: { reason } }));
    await client.invalidateQueries({ queryKey: ['compare'] });
    onClose();
  }
  return (
    <Dialog
      open
      onClose={onClose}
      title={exclusion ? `Take “${run.runName}” into fits again?` : `Leave “${run.runName}” out of fits?`}
      actions={
        <>
          <Button onClick={onClose}>{exclusion ? 'Leave it out' : 'Keep it in'}</Button>
          <Button kind="main" busy={busy !== null} onClick={() => void act(change)}>
            {exclusion ? 'Take it in again' : 'Leave it out'}
          </Button>
        </>
      }
    >
      {exclusion ? (
        <p>
          {exclusion.by} left it out: {exclusion.reason}
        </p>
      ) : (
        <>
          <p className="pb-2">
            It stays in tables and plots, drawn faint, with your name and this reason beside it, for everybody
            in the laboratory.
          </p>
          <TextArea
            label="Reason"
            value={reason}
            autoFocus
            onChange={({ target }) => setReason(target.value)}
            error={problem ?? undefined}
          />
        </>
      )}
      {exclusion && problem ? (
        <p role="alert" className="pt-2 font-strong text-red-text">
          {problem}
        </p>
      ) : null}
    </Dialog>
  );
}
