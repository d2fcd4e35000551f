/**
 * Least false discovery rate at which each hypothesis is rejected (Benjamini & Hochberg 1995):
 * the smallest of p_(j) m / j over the j-th smallest p and all larger ones, at most 1.
 */
export function falseDiscoveryQ(p: readonly number[]): number[] {
  const m = p.length;
  const order = p.map((_, i) => i).sort((a, b) => p[a] - p[b] || a - b);
  const q = new Array<number>(m);
  let least = 1;
  for (let j = m - 1; j >= 0; j--) {
    least = Math.min(least, (p[order[j]] * m) / (j + 1));
    q[order[j]] = least;
  }
  return q;
}
