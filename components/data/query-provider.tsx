'use client';

import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { useState, type ReactNode } from 'react';
import { ApiError } from './api-client';

/** Answers younger than this are shown again without asking. */
const FRESH_MS = 5_000;
const RETRIES_MAX = 3;

/** Refusals are final; a lost link and a busy server are tried again. */
const worthRetrying = (failures: number, error: Error) =>
  failures < RETRIES_MAX && error instanceof ApiError && (error.status === 0 || error.status >= 500);

/** One store of answers for all pages of a browser tab. */
export function QueryProvider({ children }: { children: ReactNode }) {
  const [client] = useState(
    () => new QueryClient({ defaultOptions: { queries: { staleTime: FRESH_MS, retry: worthRetrying } } }),
  );
  return <QueryClientProvider client={client}>{children}</QueryClientProvider>;
}
