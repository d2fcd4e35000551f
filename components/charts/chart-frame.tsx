'use client';

import { useId, useRef, useState, type ReactNode } from 'react';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { chartCell, chartCsv, type ChartTable } from '@/lib/charts/chart-table';
import { saveText, svgFileText } from './save-file';

interface ChartFrameProps {
  /** One sentence that says what the plot shows; read in its place. */
  label: string;
  table: ChartTable;
  /** Name of saved files, without ending. */
  fileName: string;
  children: ReactNode;
  /** Stands at the left under the plot. */
  caption?: ReactNode;
}

const TOOL =
  'min-h-6 text-note underline decoration-violet decoration-[1.5px] underline-offset-[3px] hover:text-violet-text pointer-coarse:min-h-11';

/** A plot with the table behind it, and both as files. */
export function ChartFrame({ label, table, fileName, children, caption }: ChartFrameProps) {
  const [shown, setShown] = useState(false);
  const drawing = useRef<HTMLDivElement>(null);
  const tableId = useId();
  const saveSvg = () => {
    const svg = drawing.current?.querySelector('svg');
    if (svg) saveText(svgFileText(svg), `${fileName}.svg`, 'image/svg+xml');
  };
  return (
    <figure className="min-w-0">
      <div ref={drawing} role="img" aria-label={label}>
        {children}
      </div>
      <figcaption className="flex flex-wrap items-baseline gap-x-4 pt-1 text-note text-ink-2">
        {caption ? <span>{caption}</span> : null}
        <span className="ml-auto flex gap-4 text-ink print:hidden">
          <button
            type="button"
            className={TOOL}
            aria-expanded={shown}
            aria-controls={tableId}
            onClick={() => setShown(!shown)}
          >
            {shown ? 'Hide table' : 'Table'}
          </button>
          <button type="button" className={TOOL} onClick={saveSvg} aria-label="Save the plot as SVG">
            SVG
          </button>
          <button
            type="button"
            className={TOOL}
            aria-label="Save the numbers as CSV"
            onClick={() => saveText(chartCsv(table), `${fileName}.csv`, 'text/csv')}
          >
            CSV
          </button>
        </span>
      </figcaption>
      <div
        id={tableId}
        hidden={!shown}
        tabIndex={shown ? 0 : undefined}
        className="max-h-80 overflow-y-auto pt-2"
      >
        {shown ? <NumbersTable label={label} table={table} /> : null}
      </div>
    </figure>
  );
}

function NumbersTable({ label, table }: { label: string; table: ChartTable }) {
  return (
    <Table label={label} density="dense">
      <thead>
        <tr>
          {table.columns.map((column, index) => (
            <HeadCell key={index} numeric={isNumeric(table, index)} unit={column.unit}>
              {column.name}
            </HeadCell>
          ))}
        </tr>
      </thead>
      <tbody>
        {table.rows.map((row, index) => (
          <Row key={index}>
            {row.map((cell, column) => (
              <Cell key={column} numeric={isNumeric(table, column)}>
                {chartCell(cell)}
              </Cell>
            ))}
          </Row>
        ))}
      </tbody>
    </Table>
  );
}

const isNumeric = (table: ChartTable, column: number) => typeof table.rows[0]?.[column] !== 'string';
