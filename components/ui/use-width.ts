'use client';

import { useEffect, useRef, useState, type RefObject } from 'react';

/** The width of an element in px, following its size; `initialPx` until it has been measured. */
export function useWidth<T extends HTMLElement>(initialPx: number): [RefObject<T | null>, number] {
  const element = useRef<T>(null);
  const [widthPx, setWidthPx] = useState(initialPx);
  useEffect(() => {
    if (!element.current) return;
    const observer = new ResizeObserver(([entry]) => setWidthPx(Math.round(entry.contentRect.width)));
    observer.observe(element.current);
    return () => observer.disconnect();
  }, []);
  return [element, widthPx];
}
