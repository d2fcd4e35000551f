'use client';

import { useEffect, useRef, useState, type ReactNode } from 'react';

/**
 * A box that scrolls sideways when its content is too wide. Only then it takes the focus, so that
 * arrow keys can scroll it; otherwise it would be one more stop of the Tab key.
 */
export function ScrollBox({ label, children }: { label: string; children: ReactNode }) {
  const box = useRef<HTMLDivElement>(null);
  const [scrolls, setScrolls] = useState(false);
  useEffect(() => {
    const element = box.current;
    if (!element) return;
    const observer = new ResizeObserver(() => setScrolls(element.scrollWidth > element.clientWidth + 1));
    observer.observe(element);
    if (element.firstElementChild) observer.observe(element.firstElementChild);
    return () => observer.disconnect();
  }, []);
  return (
    <div
      ref={box}
      className="relative max-w-full overflow-x-auto print:overflow-visible"
      {...(scrolls ? { role: 'region', 'aria-label': `${label}, scrolls sideways`, tabIndex: 0 } : {})}
    >
      {children}
    </div>
  );
}
