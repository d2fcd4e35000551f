'use client';

import { Button } from '@/components/ui/button';

/** Prints the page, or keeps it as PDF: the browser asks which. */
export function PrintButton() {
  return (
    <Button kind="main" onClick={() => window.print()}>
      Print or save as PDF
    </Button>
  );
}
