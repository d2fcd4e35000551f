import type { Column, ColumnValues, RowBatch, TableDefinition } from '@/lib/exports/column';
import { LINE_END } from '@/lib/tables/csv-chunks';
import { significant } from '@/lib/tables/number-text';
import { reconnectionsCsv, type ReconnectionRow, type VerdictText } from '@/lib/tables/reconnections-csv';
import { textCell } from '@/lib/tables/text-cell';
import { velocityPdfCsv } from '@/lib/tables/velocity-pdf-csv';
import type { Estimate } from '@/tracking/estimates/estimate';
import type { MotionMeasures } from '@/tracking/flow-measures';
import type { VelocityPdf } from '@/tracking/velocity-pdf-shape';
import type { TablePiece } from './table-pieces';

export type Value = number | string | null;

/** Significant digits of numbers in small tables, more than any of them deserves. */
const DIGITS = 10;

/** Rows as columns of the types that a table's definition names. */
export function batchOf(columns: readonly Column[], rows: readonly (readonly Value[])[]): RowBatch {
  const made = columns.map(({ store }, c): ColumnValues => {
    const values = rows.map((row) => row[c]);
    if (store === 'text') return values.map((value) => (value === null ? null : String(value)));
    const numbers = values.map((value) => (typeof value === 'number' ? value : Number.NaN));
    if (store === 'int32') return Int32Array.from(numbers);
    return store === 'float32' ? Float32Array.from(numbers) : Float64Array.from(numbers);
  });
  return { rows: rows.length, columns: made };
}

/** CSV of rows: text is kept from being taken for a formula, numbers are written in full. */
export function smallCsv(columns: readonly Column[], rows: readonly (readonly Value[])[]): string {
  const head = columns.map(({ name }) => name).join(',');
  const body = rows.map((row) =>
    row.map((value) => (typeof value === 'number' ? significant(value, DIGITS) : textCell(value))).join(','),
  );
  return [head, ...body].map((line) => line + LINE_END).join('');
}

export const piece = (
  table: TableDefinition,
  rows: readonly (readonly Value[])[],
  csv?: string,
): TablePiece => ({
  batch: batchOf(table.columns, rows),
  csv: csv ?? smallCsv(table.columns, rows),
});

export function velocityPdfPiece(table: TableDefinition, pdfs: readonly VelocityPdf[]): TablePiece {
  const rows = pdfs.flatMap(
    (pdf) =>
    pdf.count.map((count, i) => [pdf.population, pdf.component, pdf.lagS, pdf.edgesMS[i], pdf.edgesMS[i + 1], count, pdf.density[i], pdf.densityLow[i], pdf.densityHigh[i]]), // prettier-ignore
  );
  return piece(table, rows, [...velocityPdfCsv(pdfs)].join(''));
}

export function velocityKernelPiece(table: TableDefinition, pdfs: readonly VelocityPdf[]): TablePiece {
  const rows = pdfs.flatMap(({ population, component, lagS, kernel }) => {
    // Analyses that are older than the kernel estimate have none.
    if (!kernel) return [];
    const { atMS, density, widthMS, toldFromMS, toldToMS } = kernel;
    const told = (at: number) => (at >= toldFromMS && at <= toldToMS ? 1 : 0);
    return atMS.map((at, i) => [population, component, lagS, at, density[i], widthMS, told(at)]);
  });
  return piece(table, rows);
}

export function reconnectionsPiece(
  table: TableDefinition,
  candidates: readonly ReconnectionRow[],
  verdicts: readonly VerdictText[],
): TablePiece {
  const rows = candidates.map((c, place) => [c.event ?? place, c.trackA, c.trackB, c.t0S, c.xPx, c.yPx, c.minSeparationM, c.before?.amplitude ?? null, c.after?.amplitude ?? null, c.before?.exponent ?? null, c.after?.exponent ?? null, c.pChance, c.qValue, verdicts[c.event ?? place] || null]); // prettier-ignore
  return piece(table, rows, [...reconnectionsCsv(candidates, (event) => verdicts[event] ?? '')].join(''));
}

export const estimatesPiece = (table: TableDefinition, estimates: readonly Estimate[]): TablePiece =>
  piece(
    table,
    estimates.map((e) => [e.quantity, e.unit, e.method, e.value, e.low, e.high, e.level, e.note]),
  );

export const displacementsPiece = (table: TableDefinition, motion: MotionMeasures | null): TablePiece =>
  piece(
    table,
    (motion?.displacements ?? []).flatMap(
      (one) =>
      one.lagS.map((lag, i) => [one.population, one.component, lag, one.valueM2[i], one.lowM2[i], one.highM2[i]]), // prettier-ignore
    ),
  );

export const autocorrelationsPiece = (table: TableDefinition, motion: MotionMeasures | null): TablePiece =>
  piece(
    table,
    (motion?.autocorrelations ?? []).flatMap((one) =>
      one.lagS.map((lag, i) => [one.population, one.component, lag, one.value[i], one.low[i], one.high[i]]),
    ),
  );
