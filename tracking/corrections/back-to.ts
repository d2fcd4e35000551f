import type { LoggedCorrection } from './correction';
import { gestureOf, inForce } from './in-force';

/**
 * The undos, in their order, that lead a log back to what its first `length` corrections had made:
 * ids of what each takes back. Newest first, so that nothing is taken back on which something else
 * still builds.
 *
 * @param idOf makes the id of the next undo
 */
export function undosBackTo(
  log: readonly LoggedCorrection[],
  length: number,
  idOf: () => string,
): LoggedCorrection[] {
  const placeOf = new Map(log.map(({ id }, i) => [id, i]));
  const undos: LoggedCorrection[] = [];
  /** An undo in force says something of the first corrections; any other correction behind them must go. */
  const mustGo = (place: number): boolean => {
    const entry = log[place];
    if (entry.kind !== 'undo') return true;
    const target = placeOf.get(entry.of);
    return target !== undefined && gestureOf(log, target, place).some((at) => at < length);
  };
  for (;;) {
    const active = inForce([...log, ...undos]);
    let place = log.length - 1;
    while (place >= length && (active[place] === 0 || !mustGo(place))) place--;
    if (place < length) return undos;
    undos.push({ kind: 'undo', of: log[place].id, id: idOf() });
  }
}

/** Whether the first `length` corrections of a log end in the middle of a gesture. */
export function cutsGesture(log: readonly LoggedCorrection[], length: number): boolean {
  const gesture = log[length]?.gesture;
  return length > 0 && !!gesture && log[length - 1].gesture === gesture;
}
