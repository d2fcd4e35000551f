import type { ReactNode } from 'react';
import { IntervalThread } from '@/components/ui/interval-thread';
import { Quantity, Unit } from '@/components/ui/quantity';
import { Cell, HeadCell, NarrowMore, Row, Table } from '@/components/ui/table';
import { axisAround, logGrid, shareOnLogAxis, type LogAxis } from '@/lib/charts/log-axis';
import { formatQuantity, quantityText } from '@/lib/format/quantity';
import type { DisplayUnit } from '@/lib/format/unit';

/** One method's value of a quantity, SI. A value that can't be had is null, and `note` says why. */
export interface EstimateRow {
  key: string;
  method: ReactNode;
  value: number | null;
  low?: number | null;
  high?: number | null;
  /** Ends with the systematic part. */
  wideLow?: number | null;
  wideHigh?: number | null;
  /** A prior, or left out of the combined value. */
  hollow?: boolean;
  /** What it was counted from: "412 lines". */
  from?: ReactNode;
  /** What pulls it which way, or why there is no value. */
  note?: ReactNode;
  combined?: boolean;
}

interface EstimateTableProps {
  /** e.g. "Line density"; names the table. */
  label: string;
  symbol?: ReactNode;
  displayUnit: DisplayUnit;
  rows: readonly EstimateRow[];
}

const THREAD_PX = 250;

/** Estimates of one quantity side by side, each as number and as interval on one log axis. */
export function EstimateTable({ label, symbol, displayUnit, rows }: EstimateTableProps) {
  const { unit, siPerUnit } = displayUnit;
  const intervals = rows.flatMap((row) => (row.value === null ? [] : [threadOf(row, row.value, siPerUnit)]));
  const axis = axisAround(intervals);
  return (
    <Table label={label} density="dense">
      <thead>
        <tr>
          <HeadCell>Estimator</HeadCell>
          <HeadCell numeric>
            {symbol ? <>{symbol}, </> : null}
            <span className="font-text">
              <Unit>{unit}</Unit>
            </span>
          </HeadCell>
          <HeadCell className="pl-5">
            <span className="sr-only">Interval</span>
            {axis ? <AxisNumbers axis={axis} /> : null}
          </HeadCell>
          <HeadCell numeric narrow="hide">
            From
          </HeadCell>
          <HeadCell narrow="hide">Pulled by</HeadCell>
        </tr>
      </thead>
      <tbody>
        {rows.map((row) => (
          <Row key={row.key} total={row.combined}>
            <Cell head>
              <span className={`desk:whitespace-nowrap ${row.combined ? 'font-strong' : ''}`}>
                {row.method}
              </span>
              {row.from || row.note ? (
                <NarrowMore
                  items={[
                    { label: 'From', value: row.from },
                    { label: 'Pulled by', value: row.note },
                  ]}
                />
              ) : null}
            </Cell>
            <Cell numeric>
              <Quantity value={row.value} low={row.low} high={row.high} siPerUnit={siPerUnit} digits={2} />
            </Cell>
            <Cell className="w-[32%] min-w-[112px] pl-5">
              {axis && row.value !== null ? (
                <IntervalThread
                  axis={axis}
                  widthPx={THREAD_PX}
                  intervals={[threadOf(row, row.value, siPerUnit)]}
                  label={quantityText({ value: row.value, low: row.low, high: row.high, siPerUnit, unit })}
                />
              ) : null}
            </Cell>
            <Cell numeric quiet narrow="hide" className="whitespace-nowrap">
              {row.from}
            </Cell>
            <Cell quiet narrow="hide">
              {row.note}
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}

function threadOf(row: EstimateRow, value: number, siPerUnit: number) {
  const scaled = (si: number | null | undefined) => (si == null ? null : si / siPerUnit);
  return {
    value: value / siPerUnit,
    low: scaled(row.low) ?? value / siPerUnit,
    high: scaled(row.high) ?? value / siPerUnit,
    wideLow: scaled(row.wideLow),
    wideHigh: scaled(row.wideHigh),
    hollow: row.hollow,
  };
}

/** Numbers over the threads at 1 and 3 of each decade; every second one where they would touch. */
function AxisNumbers({ axis }: { axis: LogAxis }) {
  const grid = logGrid(axis);
  const shown =
    grid.length > 5
      ? grid.filter((value) =>
          String(value)
            .replace(/[0.e+-]/g, '')
            .startsWith('1'),
        )
      : grid;
  return (
    <span
      className="relative block h-4 max-w-full font-text text-ink-3 max-hand:hidden"
      style={{ width: THREAD_PX }}
    >
      {shown.map((value) => (
        <span
          key={value}
          className="absolute -translate-x-1/2 whitespace-nowrap first:translate-x-0"
          style={{ left: `${(shareOnLogAxis(value, axis) * 100).toFixed(2)}%` }}
        >
          <AxisNumber value={value} />
        </span>
      ))}
    </span>
  );
}

function AxisNumber({ value }: { value: number }) {
  const text = formatQuantity({ value, digits: 1 });
  if (!text) return null;
  if (text.exponent === 0) return <>{text.value}</>;
  return <Unit>{text.value === '1' ? `10^${text.exponent}` : `${text.value}×10^${text.exponent}`}</Unit>;
}
