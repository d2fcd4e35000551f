/** What a printed page says about itself at its end: where its numbers come from. Not shown on screen. */
export function PrintFoot({ facts }: { facts: readonly string[] }) {
  return (
    <footer className="hidden border-t border-line pt-2 text-small text-ink-2 print:block">
      {facts.join(' \u00b7 ')}
    </footer>
  );
}
