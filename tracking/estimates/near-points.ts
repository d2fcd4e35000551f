/** Pairs of points, numbers i < j, no further apart than a radius. Cells of one radius; points of a few hundred. */
export function nearPoints(
  x: readonly number[],
  y: readonly number[],
  radius: number,
): { i: number; j: number }[] {
  const cells = new Map<string, number[]>();
  const near: { i: number; j: number }[] = [];
  for (let j = 0; j < x.length; j++) {
    const column = Math.floor(x[j] / radius);
    const row = Math.floor(y[j] / radius);
    for (let r = row - 1; r <= row + 1; r++) {
      for (let c = column - 1; c <= column + 1; c++) {
        for (const i of cells.get(`${c} ${r}`) ?? [])
          if (Math.hypot(x[i] - x[j], y[i] - y[j]) <= radius) near.push({ i, j });
      }
    }
    const own = `${column} ${row}`;
    const known = cells.get(own);
    if (known) known.push(j);
    else cells.set(own, [j]);
  }
  return near;
}
