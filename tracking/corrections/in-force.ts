import type { LoggedCorrection } from './correction';

/** Places of all corrections before `end` that are taken back with the one at `target`: its gesture. */
export function gestureOf(log: readonly LoggedCorrection[], target: number, end: number): number[] {
  const { gesture } = log[target];
  if (!gesture) return [target];
  const places: number[] = [];
  for (let i = 0; i < end; i++) if (log[i].gesture === gesture) places.push(i);
  return places;
}

/**
 * Which corrections of a log are in force: 1 where no undo that is itself in force names the
 * correction or its gesture. An undo can only name what stands before it, so one pass from the end
 * tells. Undos of corrections that are not in the log have no effect.
 */
export function inForce(log: readonly LoggedCorrection[]): Uint8Array {
  const active = new Uint8Array(log.length).fill(1);
  const placeOf = new Map(log.map(({ id }, i) => [id, i]));
  for (let i = log.length - 1; i >= 0; i--) {
    const entry = log[i];
    if (active[i] === 0 || entry.kind !== 'undo') continue;
    const target = placeOf.get(entry.of);
    if (target === undefined || target >= i) continue;
    for (const place of gestureOf(log, target, i)) active[place] = 0;
  }
  return active;
}
