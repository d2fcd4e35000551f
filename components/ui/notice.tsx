'use client';

import {
  createContext,
  useCallback,
  useContext,
  useEffect,
  useMemo,
  useRef,
  useState,
  type ReactNode,
} from 'react';

export interface Notice {
  text: string;
  /** Takes the deed back; the notice then says so by closing. */
  undo?: () => void;
}

type Notify = (notice: Notice | string) => void;
const NoticeContext = createContext<Notify>(() => {});

/** Says one line at the foot of the page for 6 s. Errors don't belong here: they stay at their place. */
export const useNotice = (): Notify => useContext(NoticeContext);

/** Long enough to read a line and reach Undo. */
const SHOWN_MS = 6000;

/** Holds the notice line; wraps the whole page once, in the root layout. */
export function NoticeProvider({ children }: { children: ReactNode }) {
  const [notice, setNotice] = useState<Notice | null>(null);
  const timer = useRef<ReturnType<typeof setTimeout>>(undefined);
  const close = useCallback(() => setNotice(null), []);
  const wait = useCallback(() => {
    clearTimeout(timer.current);
    timer.current = setTimeout(close, SHOWN_MS);
  }, [close]);
  const notify = useMemo<Notify>(
    () => (next) => {
      setNotice(typeof next === 'string' ? { text: next } : next);
      wait();
    },
    [wait],
  );
  useEffect(() => () => clearTimeout(timer.current), []);
  return (
    <NoticeContext.Provider value={notify}>
      {children}
      <div
        role="status"
        // Reading or reaching for Undo keeps it open.
        onPointerEnter={() => clearTimeout(timer.current)}
        onPointerLeave={wait}
        onFocus={() => clearTimeout(timer.current)}
        onBlur={wait}
        className="fixed inset-x-0 bottom-0 z-notice flex justify-center px-sheet-x-narrow pb-3 empty:hidden pointer-events-none print:hidden"
      >
        {notice ? (
          <p className="pointer-events-auto flex items-center gap-4 rounded-button bg-ink px-4 py-2 text-note text-paper shadow-lifted">
            {notice.text}
            {notice.undo ? (
              <button
                type="button"
                className="min-h-6 font-strong underline underline-offset-[3px] focus-visible:outline-paper"
                onClick={() => {
                  notice.undo?.();
                  close();
                }}
              >
                Undo
              </button>
            ) : null}
          </p>
        ) : null}
      </div>
    </NoticeContext.Provider>
  );
}
