'use client';

import { useEffect, useRef } from 'react';

const TYPED_IN = 'input, textarea, select, [contenteditable], dialog';

/**
 * Listens to keys of the whole page, but never to what is typed into a field, nor to anything with a modifier.
 * @param onKey tells whether it has dealt with the key
 */
export function useDeskKeys(onKey: (key: string, event: KeyboardEvent) => boolean): void {
  const latest = useRef(onKey);
  useEffect(() => {
    latest.current = onKey;
  });
  useEffect(() => {
    const listen = (event: KeyboardEvent) => {
      if (event.ctrlKey || event.metaKey || event.altKey || event.isComposing) return;
      const target = event.target instanceof Element ? event.target : null;
      if (target?.closest(TYPED_IN)) return;
      if (event.key === 'Enter' && target?.closest('button, a')) return;
      if (latest.current(event.key, event)) event.preventDefault();
    };
    window.addEventListener('keydown', listen);
    return () => window.removeEventListener('keydown', listen);
  }, []);
}
