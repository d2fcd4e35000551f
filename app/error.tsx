'use client';

import { Failure } from '@/components/shell/failure';

export default function ErrorPage({
  error,
  reset,
}: {
  error: Error & { digest?: string };
  reset: () => void;
}) {
  return <Failure error={error} retry={reset} />;
}
