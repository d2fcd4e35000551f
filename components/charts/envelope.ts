/** Frames of one column of a plot: their span of counts and the mean. */
export interface EnvelopeColumn {
  /** Middle frame of the column. */
  frame: number;
  low: number;
  high: number;
  mean: number;
}

/**
 * A long series as at most `columns` columns, none of its extremes lost.
 * @param counts one value per `stride` frames, from frame 0.
 */
export function envelope(counts: readonly number[], columns: number, stride = 1): EnvelopeColumn[] {
  const perColumn = Math.max(1, Math.ceil(counts.length / Math.max(1, columns)));
  const result: EnvelopeColumn[] = [];
  for (let from = 0; from < counts.length; from += perColumn) {
    const part = counts.slice(from, from + perColumn);
    result.push({
      frame: (from + (part.length - 1) / 2) * stride,
      low: part.reduce((a, b) => Math.min(a, b)),
      high: part.reduce((a, b) => Math.max(a, b)),
      mean: part.reduce((a, b) => a + b, 0) / part.length,
    });
  }
  return result;
}
