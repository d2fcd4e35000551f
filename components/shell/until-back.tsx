'use client';

import { useEffect, useState } from 'react';

/** Between two looks, ms. */
const AGAIN_MS = 3_000;

/** Looks whether the database answers again, and then opens the page that was asked for. */
export function UntilBack({ destination }: { destination: string }) {
  const [looks, setLooks] = useState(0);
  useEffect(() => {
    const timer = setTimeout(async () => {
      const health = await fetch('/api/health', { cache: 'no-store' })
        .then((response) => response.json() as Promise<{ database?: string }>)
        .catch(() => null);
      if (health?.database === 'up') window.location.replace(destination);
      else setLooks((count) => count + 1);
    }, AGAIN_MS);
    return () => clearTimeout(timer);
  }, [destination, looks]);
  return (
    <p role="status" className="text-note text-ink-2">
      {looks === 0
        ? 'Looking again in three seconds.'
        : `Looked ${looks === 1 ? 'once' : `${looks} times`}; looking again.`}
    </p>
  );
}
