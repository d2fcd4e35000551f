'use client';

import Link from 'next/link';
import { useEffect } from 'react';
import { Button, ButtonLink } from '@/components/ui/button';
import { PlainPage } from './plain-page';

/** A page that broke: says what is safe, offers to draw it again, and names the report's number. */
export function Failure({ error, retry }: { error: Error & { digest?: string }; retry: () => void }) {
  useEffect(() => {
    console.error(error);
  }, [error]);
  return (
    <PlainPage title="This page could not be drawn">
      <p role="alert">
        The fault is on our side. Nothing that was stored is lost, and work in the queue goes on. Try again,
        or go to the <Link href="/">overview</Link>.
      </p>
      {error.digest ? (
        <p className="text-note text-ink-2">
          The server keeps the details under <span className="bg-sunk px-1 tabular-nums">{error.digest}</span>
          ; give this number to your administrator.
        </p>
      ) : null}
      <div className="flex gap-2">
        <Button kind="main" onClick={retry}>
          Try again
        </Button>
        <ButtonLink href="/">Open the overview</ButtonLink>
      </div>
    </PlainPage>
  );
}
