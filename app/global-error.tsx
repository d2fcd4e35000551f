'use client';

import { Failure } from '@/components/shell/failure';
import { fontVariables } from './fonts';
import './globals.css';

/** Takes the place of the root layout when that breaks itself, so it brings its own html element. */
export default function GlobalError({
  error,
  reset,
}: {
  error: Error & { digest?: string };
  reset: () => void;
}) {
  return (
    <html lang="en" className={fontVariables}>
      <head>
        <title>Beadline</title>
      </head>
      <body>
        <Failure error={error} retry={reset} />
      </body>
    </html>
  );
}
