'use client';

import { useEffect, useRef, useState } from 'react';
import { tiePath } from './tie-path';

interface Tie {
  key: string;
  d: string;
  dotX: number;
  dotY: number;
  tone: string;
}

function measure(root: HTMLElement): Tie[] {
  const sheet = root.getBoundingClientRect();
  const ties: Tie[] = [];
  for (const row of root.querySelectorAll<HTMLElement>('[data-tie-from]')) {
    const key = row.dataset.tieFrom!;
    const note = [...root.querySelectorAll<HTMLElement>('[data-tie-to]')].find(
      (element) => element.dataset.tieTo === key,
    );
    if (!note) continue;
    const from = row.getBoundingClientRect();
    const to = note.getBoundingClientRect();
    // Under the page there is no gutter to run through, and what is hidden has no box.
    if (to.width === 0 || from.width === 0 || to.left < from.right) continue;
    const ends = {
      fromX: from.right - sheet.left,
      fromY: from.bottom - sheet.top - 0.75,
      toX: to.left - sheet.left - 10,
      toY: to.top - sheet.top + 10,
    };
    ties.push({
      key,
      d: tiePath(ends),
      dotX: ends.fromX,
      dotY: ends.fromY,
      tone: row.dataset.tieTone === 'caution' ? 'text-red' : 'text-amber',
    });
  }
  return ties;
}

/**
 * Draws the threads from rows (`data-tie-from`) to their notes (`data-tie-to`) inside the
 * positioned element around it. Decoration for the eye: the note itself says what it is about.
 */
export function Ties() {
  const svg = useRef<SVGSVGElement>(null);
  const [ties, setTies] = useState<Tie[]>([]);
  useEffect(() => {
    const root = svg.current?.parentElement;
    if (!root) return;
    const update = () => {
      const next = measure(root);
      setTies((old) => (JSON.stringify(old) === JSON.stringify(next) ? old : next));
    };
    const sizes = new ResizeObserver(update);
    sizes.observe(root);
    // A warning can come or go while the sheet keeps its size.
    const changes = new MutationObserver((records) => {
      if (records.some((record) => !svg.current?.contains(record.target))) update();
    });
    changes.observe(root, {
      subtree: true,
      childList: true,
      attributeFilter: ['data-tie-from', 'data-tie-to'],
    });
    void document.fonts.ready.then(update);
    return () => {
      sizes.disconnect();
      changes.disconnect();
    };
  }, []);
  return (
    <svg
      ref={svg}
      aria-hidden="true"
      width="1"
      height="1"
      className="pointer-events-none absolute left-0 top-0 overflow-visible print:hidden"
    >
      {ties.map((tie) => (
        <g key={tie.key} className={tie.tone}>
          <path d={tie.d} fill="none" stroke="currentColor" strokeWidth="1.5" />
          <circle cx={tie.dotX} cy={tie.dotY} r="4" fill="currentColor" />
        </g>
      ))}
    </svg>
  );
}
