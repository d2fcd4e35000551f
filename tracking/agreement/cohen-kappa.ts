/** How well two readers agree beyond chance. */
export interface Kappa {
  /** Things that both have judged. */
  count: number;
  /** Share on which they agree; NaN for none. */
  observed: number;
  /** Share on which readers with the same habits would agree by chance. */
  expected: number;
  /** NaN where both always gave the same one answer: chance alone explains that. */
  kappa: number;
  /** Of kappa itself, for an interval; of large samples. */
  standardError: number;
  /** Under the hypothesis that they agree by chance alone, for a test. */
  standardErrorByChance: number;
  /** Interval of 95 %, cut to -1 .. 1. */
  low: number;
  high: number;
}

/** Standard errors of a 95 % interval. */
const Z95 = 1.959964;

/**
 * Cohen's kappa of two readers who each gave one of `k` answers to the same things.
 *
 * Kappa: Cohen (1960), Educational and Psychological Measurement 20, 37. Standard errors: Fleiss, Cohen & Everitt
 * (1969), Psychological Bulletin 72, 323, equations for unweighted kappa; they hold for large samples and are too
 * small for few things.
 *
 * @param counts k x k, row by row: entry (i, j) counts the things that the first called i and the second j.
 * @throws RangeError for a table that is not square, or has a negative entry or one that is no number.
 */
export function cohenKappa(counts: ArrayLike<number>): Kappa {
  const k = Math.sqrt(counts.length);
  if (!Number.isInteger(k) || k === 0) {
    throw new RangeError(`counts must be a square table. Received ${counts.length} entries.`);
  }
  let count = 0;
  for (let i = 0; i < counts.length; i++) {
    if (!(counts[i] >= 0)) throw new RangeError(`counts must be >= 0. Received ${counts[i]}.`);
    count += counts[i];
  }
  const { rows, columns } = margins(counts, k, count);
  let observed = 0;
  let expected = 0;
  for (let i = 0; i < k; i++) {
    observed += counts[i * k + i] / count;
    expected += rows[i] * columns[i];
  }
  // One answer only, up to the rounding of the sums.
  const kappa = 1 - expected > 1e-12 ? (observed - expected) / (1 - expected) : Number.NaN;
  const shares = { counts, k, count, rows, columns, observed, expected };
  const standardError = kappa === kappa ? errorOfKappa(shares) : Number.NaN;
  return {
    count,
    observed,
    expected,
    kappa,
    standardError,
    standardErrorByChance: kappa === kappa ? errorByChance(shares) : Number.NaN,
    low: Math.max(-1, kappa - Z95 * standardError),
    high: Math.min(1, kappa + Z95 * standardError),
  };
}

interface Shares {
  counts: ArrayLike<number>;
  k: number;
  count: number;
  rows: Float64Array;
  columns: Float64Array;
  observed: number;
  expected: number;
}

function margins(counts: ArrayLike<number>, k: number, count: number) {
  const rows = new Float64Array(k);
  const columns = new Float64Array(k);
  for (let i = 0; i < k; i++) {
    for (let j = 0; j < k; j++) {
      rows[i] += counts[i * k + j] / count;
      columns[j] += counts[i * k + j] / count;
    }
  }
  return { rows, columns };
}

function errorOfKappa({ counts, k, count, rows, columns, observed, expected }: Shares): number {
  let onDiagonal = 0;
  let offDiagonal = 0;
  for (let i = 0; i < k; i++) {
    for (let j = 0; j < k; j++) {
      const share = counts[i * k + j] / count;
      if (i === j) {
        onDiagonal += share * (1 - expected - (rows[i] + columns[i]) * (1 - observed)) ** 2;
      } else {
        offDiagonal += share * (columns[i] + rows[j]) ** 2;
      }
    }
  }
  const variance =
    onDiagonal + (1 - observed) ** 2 * offDiagonal - (observed * expected - 2 * expected + observed) ** 2;
  return Math.sqrt(Math.max(0, variance) / count) / (1 - expected) ** 2;
}

function errorByChance({ k, count, rows, columns, expected }: Shares): number {
  let products = 0;
  for (let i = 0; i < k; i++) products += rows[i] * columns[i] * (rows[i] + columns[i]);
  return Math.sqrt(Math.max(0, expected + expected ** 2 - products) / count) / (1 - expected);
}
