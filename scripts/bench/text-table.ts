/** Rows of cells as aligned text: the first column to the left, the others to the right. */
export function textTable(rows: readonly (readonly string[])[]): string {
  const columns = Math.max(...rows.map((row) => row.length));
  const widths = Array.from({ length: columns }, (_, c) =>
    Math.max(...rows.map((row) => row[c]?.length ?? 0)),
  );
  const line = (row: readonly string[]) =>
    widths
      .map((width, c) => (c === 0 ? (row[c] ?? '').padEnd(width) : (row[c] ?? '').padStart(width)))
      .join('  ')
      .trimEnd();
  const [head, ...body] = rows;
  return [line(head), widths.map((width) => '-'.repeat(width)).join('  '), ...body.map(line)].join('\n');
}

/** Three digits; a dash for what was not measured. */
export function figure(value: number): string {
  if (!Number.isFinite(value)) return '-';
  if (value >= 1000) return Math.round(Number(value.toPrecision(3))).toLocaleString('en');
  return String(Number(value.toPrecision(3)));
}
