/** Answers that a reader can give, in the order of the rows and columns of a table of agreement. */
export const ANSWERS = ['yes', 'no', 'cannot-tell'] as const;
export type VerdictAnswer = (typeof ANSWERS)[number];

/**
 * Counts how two readers judged the same things.
 * @param pairs the answers of the first and of the second to each thing.
 * @returns 3 x 3 counts, row by row: the row is the first reader's answer, the column the second's.
 */
export function agreementTable(pairs: Iterable<readonly [VerdictAnswer, VerdictAnswer]>): Float64Array {
  const counts = new Float64Array(ANSWERS.length ** 2);
  for (const [first, second] of pairs) {
    counts[ANSWERS.indexOf(first) * ANSWERS.length + ANSWERS.indexOf(second)]++;
  }
  return counts;
}
