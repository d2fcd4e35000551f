'use client';

import { usePathname, useRouter, useSearchParams } from 'next/navigation';
import { useEffect, useRef } from 'react';

/** What stands in the address behind the question mark, and how to change it. */
export interface Address {
  path: string;
  /** What the page shows now. */
  shown: URLSearchParams;
  /**
   * Replaces the address without scrolling.
   * @param next makes the new address from the parameters asked for last. Those are ahead of the shown ones while a
   *   change is on its way: a quick second choice must not undo the first.
   */
  change(next: (asked: URLSearchParams) => string): void;
}

export function useAddress(): Address {
  const path = usePathname();
  const params = useSearchParams();
  const router = useRouter();
  const text = params.toString();
  const asked = useRef(text);
  useEffect(() => {
    asked.current = text;
  }, [text]);
  return {
    path,
    shown: new URLSearchParams(text),
    change: (next) => {
      const href = next(new URLSearchParams(asked.current));
      asked.current = href.split('?')[1] ?? '';
      router.replace(href, { scroll: false });
    },
  };
}
