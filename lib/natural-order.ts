const PARTS = /\d+|\D+/g;

function compareParts(a: string, b: string): number {
  const bothNumbers = /^\d/.test(a) && /^\d/.test(b);
  if (!bothNumbers) return a < b ? -1 : a > b ? 1 : 0;
  const [x, y] = [a.replace(/^0+(?=\d)/, ''), b.replace(/^0+(?=\d)/, '')];
  // Compared as text of equal length, so numbers of any length (time stamps) keep their order.
  return x.length - y.length || (x < y ? -1 : x > y ? 1 : 0);
}

/**
 * Order of file names by the numbers in them: `f2` before `f10`. Letters compare in small form
 * first; names that are equal up to leading zeros or capitals fall back to plain text order, so the
 * order is total and the same on each machine.
 */
export function compareNaturally(a: string, b: string): number {
  const left = a.toLowerCase().match(PARTS) ?? [];
  const right = b.toLowerCase().match(PARTS) ?? [];
  for (let i = 0; i < Math.min(left.length, right.length); i++) {
    const order = compareParts(left[i]!, right[i]!);
    if (order !== 0) return order;
  }
  return left.length - right.length || (a < b ? -1 : a > b ? 1 : 0);
}
