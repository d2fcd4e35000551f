/** Waits on a condition instead of sleeping. @throws Error with the last value when it never holds. */
export async function until<T>(
  look: () => Promise<T> | T,
  holds: (value: T) => boolean = Boolean,
  { withinMs = 10_000, everyMs = 25 }: { withinMs?: number; everyMs?: number } = {},
): Promise<T> {
  const end = Date.now() + withinMs;
  for (;;) {
    const value = await look();
    if (holds(value)) return value;
    if (Date.now() > end) throw new Error(`Not within ${withinMs} ms; last seen: ${JSON.stringify(value)}`);
    await new Promise((resolve) => setTimeout(resolve, everyMs));
  }
}
