/**
 * Corrections that were prepared on an older state, for a newer one: what others did meanwhile may
 * have taken the numbers that tracks made by these corrections were going to have.
 *
 * @param from the next free number when they were prepared
 * @param to the next free number now
 */
export function renumberNewTracks<T extends object>(
  corrections: readonly T[],
  from: number,
  to: number,
): T[] {
  const moved = (number: unknown) =>
    typeof number === 'number' && number >= from ? number - from + to : number;
  return corrections.map((correction) => {
    const copy = { ...correction } as Record<string, unknown>;
    for (const name of ['track', 'with']) if (name in copy) copy[name] = moved(copy[name]);
    return copy as T;
  });
}
