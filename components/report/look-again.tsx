'use client';

import { useRouter } from 'next/navigation';
import { useEffect, useState } from 'react';

/** Strips are composed by a worker within seconds; where none is at work, nobody waits for ever. */
const LOOK_AGAIN_MS = 3_000;
const LOOKS_MOST = 60;

/** Looks at the page anew for as long as something on it is being made. */
export function LookAgain() {
  const router = useRouter();
  const [looks, setLooks] = useState(0);
  useEffect(() => {
    if (looks >= LOOKS_MOST) return;
    const timer = setTimeout(() => {
      router.refresh();
      setLooks((before) => before + 1);
    }, LOOK_AGAIN_MS);
    return () => clearTimeout(timer);
  }, [looks, router]);
  return null;
}
