'use client';

import { signOut } from 'next-auth/react';
import { useState } from 'react';
import { Button } from '@/components/ui/button';
import { ConfirmDialog } from '@/components/ui/dialog';

/** Signs a person out everywhere. */
export function EndSessions({ end }: { end: () => Promise<{ ok: true } | { ok: false; detail: string }> }) {
  const [asking, setAsking] = useState(false);
  return (
    <div className="flex flex-col items-start gap-2 pt-2">
      <p className="max-w-[60ch] text-note text-ink-2">
        A session ends by itself after eight hours without use, and after a day in any case.
      </p>
      <Button onClick={() => setAsking(true)}>End all sessions</Button>
      <ConfirmDialog
        open={asking}
        onClose={() => setAsking(false)}
        question="End all your sessions?"
        keep="Stay signed in"
        act="End all"
        onAct={async () => {
          const result = await end();
          if (!result.ok) throw new Error(result.detail);
          await signOut({ callbackUrl: '/sign-in' });
        }}
      >
        You are signed out here and on every other device. Tokens of scripts go on working.
      </ConfirmDialog>
    </div>
  );
}
