'use client';

import { useEffect, useState } from 'react';

/** A value once it has not changed for a while: typing "12" must not try a recipe with "1". */
export function useSettled<T>(value: T, restMs: number): T {
  const [settled, setSettled] = useState(value);
  const key = JSON.stringify(value);
  useEffect(() => {
    const timer = setTimeout(() => setSettled(JSON.parse(key) as T), restMs);
    return () => clearTimeout(timer);
  }, [key, restMs]);
  return settled;
}
