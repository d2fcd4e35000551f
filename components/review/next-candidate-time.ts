const MARK = 'review:judged';
/** Name of the measure: from the key that judges until the next candidate stands on the screen. */
export const NEXT_CANDIDATE = 'review:next-candidate';

/** The moment of the verdict. */
export const markJudged = (): void => {
  performance.mark(MARK);
};

/** To be called once the next candidate is drawn: measures until the browser has painted it. */
export function measureNextCandidate(candidateId: string): void {
  if (performance.getEntriesByName(MARK).length === 0) return;
  const start = performance.getEntriesByName(MARK).at(-1)!.startTime;
  performance.clearMarks(MARK);
  requestAnimationFrame(() => {
    // A message comes after the frame that was asked for has been painted.
    const { port1, port2 } = new MessageChannel();
    port1.onmessage = () => {
      performance.measure(NEXT_CANDIDATE, { start, end: performance.now(), detail: candidateId });
      port1.close();
    };
    port2.postMessage(null);
  });
}
