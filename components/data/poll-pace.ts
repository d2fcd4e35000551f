const FIRST_MS = 2_000;
const LATER_MS = 5_000;
const LATE_MS = 15_000;

/** How long to wait before asking again, by how long the stream has been gone: 2 s, 5 s, 15 s. */
export function pollAfterMs(lostForMs: number): number {
  if (lostForMs < 30_000) return FIRST_MS;
  return lostForMs < 120_000 ? LATER_MS : LATE_MS;
}
