/** What the server has said, and where it turned out not to be true. */
export interface Ledger {
  /** Counts something that went well. */
  count(what: string, by?: number): void;
  /** Writes down that a promise was broken. */
  broken(sentence: string): void;
  /** A line for people, with the time since the start. */
  say(sentence: string): void;
  counts: ReadonlyMap<string, number>;
  violations: readonly string[];
}

export function openLedger(print: (line: string) => void): Ledger {
  const began = performance.now();
  const counts = new Map<string, number>();
  const violations: string[] = [];
  const say = (sentence: string) =>
    print(`${((performance.now() - began) / 1000).toFixed(1).padStart(7)} s  ${sentence}`);
  return {
    counts,
    violations,
    say,
    count: (what, by = 1) => void counts.set(what, (counts.get(what) ?? 0) + by),
    broken(sentence) {
      violations.push(sentence);
      say(`BROKEN: ${sentence}`);
    },
  };
}
