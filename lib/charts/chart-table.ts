/** The numbers behind a plot: what its table shows and its CSV holds. */
export interface ChartTable {
  columns: readonly { name: string; unit?: string }[];
  rows: readonly (readonly (string | number | null)[])[];
}

const quoted = (text: string) => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

/** CSV by RFC 4180 with a header row, point decimals, twelve digits, empty for unknown. */
export function chartCsv({ columns, rows }: ChartTable): string {
  const head = columns.map(({ name, unit }) => quoted(unit ? `${name} (${unit})` : name));
  const body = rows.map((row) =>
    row.map((cell) => {
      if (typeof cell === 'string') return quoted(cell);
      // Twelve digits hold every measured value, without the dust of a unit's conversion.
      return cell === null || !Number.isFinite(cell) ? '' : String(Number(cell.toPrecision(12)));
    }),
  );
  return [head, ...body].map((row) => `${row.join(',')}\r\n`).join('');
}

/** A cell as people read it: four digits, a real minus, empty for unknown. */
export function chartCell(cell: string | number | null): string {
  if (cell === null || (typeof cell === 'number' && !Number.isFinite(cell))) return '';
  if (typeof cell === 'string') return cell;
  const size = Math.abs(cell);
  const plain = Number.isInteger(cell) && size < 1e6;
  const text = plain
    ? String(cell)
    : size !== 0 && (size < 1e-3 || size >= 1e6)
      ? cell.toExponential(3)
      : cell.toPrecision(4);
  return text.replaceAll('-', '\u2212');
}
