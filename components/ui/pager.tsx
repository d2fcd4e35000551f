import { ButtonLink } from './button';

interface PagerProps {
  /** What is listed, for the name of the landmark: "Runs". */
  label: string;
  /** Address of the page before; null on the first. */
  backHref: string | null;
  /** Address of the page after; null on the last. */
  nextHref: string | null;
  /** e.g. "50 of 312 runs". */
  summary?: string;
}

/** Back and next through a long list by cursors; nothing at all where everything fits on one page. */
export function Pager({ label, backHref, nextHref, summary }: PagerProps) {
  if (!backHref && !nextHref) return null;
  return (
    <nav aria-label={`Pages of ${label}`} className="flex items-center gap-2 pt-3 print:hidden">
      {summary ? <span className="mr-auto text-note text-ink-2">{summary}</span> : null}
      {backHref ? (
        <ButtonLink href={backHref} rel="prev" className="ml-auto">
          Back
        </ButtonLink>
      ) : null}
      {nextHref ? (
        <ButtonLink href={nextHref} rel="next" className={backHref ? '' : 'ml-auto'}>
          Next
        </ButtonLink>
      ) : null}
    </nav>
  );
}
