'use client';

import type { UseQueryResult } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { Button } from '@/components/ui/button';
import { LoadingBars } from '@/components/ui/loading-bars';
import { ErrorState, StaleLine } from '@/components/ui/page-states';

interface AnswerProps<T> {
  query: UseQueryResult<T>;
  /** What is awaited, for screen readers and the error line: "the campaigns". */
  what: string;
  children: (data: T) => ReactNode;
}

/**
 * An answer of the API at its place: bars while it loads, the reason and a way to try again when it
 * failed, and old values under a line when only the newest could not be had.
 */
export function Answer<T>({ query, what, children }: AnswerProps<T>) {
  const retry = <Button onClick={() => void query.refetch()}>Try again</Button>;
  if (query.data === undefined) {
    if (query.isError) {
      return (
        <ErrorState live what={`Could not load ${what}.`} action={retry}>
          {query.error.message}
        </ErrorState>
      );
    }
    return <LoadingBars label={`Loading ${what}`} />;
  }
  return (
    <>
      {query.isError ? (
        <div className="pb-2">
          <StaleLine what="These may be out of date.">
            {query.error.message}{' '}
            <button type="button" className="underline" onClick={() => void query.refetch()}>
              Try again
            </button>
          </StaleLine>
        </div>
      ) : null}
      {children(query.data)}
    </>
  );
}
