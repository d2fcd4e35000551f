import { readdirSync, readFileSync } from 'node:fs';
import { textTable } from '@/scripts/bench/text-table';
import { onDatabase } from './database';
import type { Ledger } from './ledger';
import type { EnduringProduct } from './product';

const EVERY_MS = 5_000;
const MB = 1024;
/** A process that has been used may have taken so much more than a fresh one, MB. */
const GROWTH_MOST_MB = 250;
const DESCRIPTORS_MOST = 200;
/** A process this young is still filling its caches, s. */
const GROWN_UP_S = 45;

interface Sample {
  name: string;
  pid: number;
  ageS: number;
  residentMB: number;
  descriptors: number;
}

/** Looks at memory and descriptors of the product's processes until it is stopped. */
export function watchProcesses(product: EnduringProduct) {
  const samples: Sample[] = [];
  const born = new Map<number, number>();
  const look = () => {
    for (const [name, pid] of Object.entries(product.pids())) {
      if (pid === null) continue;
      if (!born.has(pid)) born.set(pid, Date.now());
      const residentMB = resident(pid);
      const descriptors = openDescriptors(pid);
      if (residentMB === null || descriptors === null) continue;
      const ageS = (Date.now() - born.get(pid)!) / 1000;
      samples.push({ name: name.replace(/-\d+$/, ''), pid, ageS, residentMB, descriptors });
    }
  };
  const timer = setInterval(look, EVERY_MS);
  return {
    samples,
    stop() {
      clearInterval(timer);
      look();
    },
  };
}

function resident(pid: number): number | null {
  try {
    // A process that has just been killed has a status, but no memory any more.
    const found = /^VmRSS:\s+(\d+) kB/m.exec(readFileSync(`/proc/${pid}/status`, 'latin1'));
    return found ? Number(found[1]) / MB : null;
  } catch {
    return null;
  }
}

function openDescriptors(pid: number): number | null {
  try {
    return readdirSync(`/proc/${pid}/fd`).length;
  } catch {
    return null;
  }
}

/** A table of memory and descriptors by kind of process; growth beyond the bounds is a broken promise. */
export function tellProcesses(samples: readonly Sample[], ledger: Ledger): string {
  const rows = [
    ['process', 'starts', 'memory when young', 'median', 'most, MB', 'descriptors, median', 'most'],
  ];
  for (const name of new Set(samples.map((sample) => sample.name))) {
    const of = samples.filter((sample) => sample.name === name);
    const young = median(of.filter(({ ageS }) => ageS < GROWN_UP_S).map(({ residentMB }) => residentMB));
    const memory = of.map(({ residentMB }) => residentMB);
    const descriptors = of.map((sample) => sample.descriptors);
    const [most, mostDescriptors] = [Math.max(...memory), Math.max(...descriptors)];
    const starts = new Set(of.map(({ pid }) => pid)).size;
    const figures = [starts, young, median(memory), most, median(descriptors), mostDescriptors];
    rows.push([name, ...figures.map((figure) => figure.toFixed(0))]);
    if (most - young > GROWTH_MOST_MB) {
      ledger.broken(`memory of ${name} grew from ${young.toFixed(0)} to ${most.toFixed(0)} MB`);
    }
    if (mostDescriptors > DESCRIPTORS_MOST) ledger.broken(`${name} had ${mostDescriptors} descriptors open`);
  }
  return textTable(rows);
}

const median = (values: number[]): number =>
  values.length === 0 ? NaN : values.toSorted((a, b) => a - b)[values.length >> 1];

export interface TableSize {
  name: string;
  rows: number;
  bytes: number;
}

/** Rows and bytes of every table. */
export async function tableSizes(databaseUrl: string): Promise<TableSize[]> {
  const names = await onDatabase<{ name: string }>(
    databaseUrl,
    `SELECT format('%I.%I', schemaname, tablename) AS name FROM pg_tables
     WHERE schemaname IN ('public', 'pgboss') ORDER BY 1`,
  );
  const sizes: TableSize[] = [];
  for (const { name } of names) {
    const [row] = await onDatabase<{ rows: number; bytes: number }>(
      databaseUrl,
      `SELECT (SELECT count(*) FROM ${name})::float8 AS rows, pg_total_relation_size('${name}')::float8 AS bytes`,
    );
    sizes.push({ name, ...row });
  }
  return sizes;
}

/** Tables that hold what people made may grow with it, by so many rows per thing made at most. */
export function tellTables(before: TableSize[], after: TableSize[]): string {
  const rows = [['table', 'rows before', 'rows after', 'MB before', 'MB after']];
  for (const { name, rows: count, bytes } of after) {
    const then = before.find((table) => table.name === name);
    if (count === (then?.rows ?? 0) && bytes === (then?.bytes ?? 0)) continue;
    const megabytes = (value: number) => (value / 2 ** 20).toFixed(2);
    rows.push([name, String(then?.rows ?? 0), String(count), megabytes(then?.bytes ?? 0), megabytes(bytes)]);
  }
  return textTable(rows);
}

/** Bells of the queue are gone soon after they rang: more rows than this would be a leak. */
const BELLS_MOST = 300;
/** Fewer rows than this at half-time say nothing: the empty tables weigh more. */
const ROWS_LEAST = 2_000;
/** A row may take so many times the room at the end that it took at half-time: pages fill unevenly. */
const GROWTH_MOST = 1.6;

const sum = (sizes: readonly TableSize[], of: 'bytes' | 'rows') =>
  sizes.reduce((total, size) => total + size[of], 0);
const rowsOf = (sizes: readonly TableSize[], name: string) =>
  sizes.find((size) => size.name === name)?.rows ?? 0;

/**
 * Whether the database grows with what people make and not with time: room per row at half-time and at the end, and
 * the rows of the queue when all work is done. Growth beyond the bounds is a broken promise.
 */
export function tellGrowth(
  [start, middle, end]: readonly [TableSize[], TableSize[], TableSize[]],
  ledger: Ledger,
): string {
  const roomUntil = (to: TableSize[]) => {
    const rows = sum(to, 'rows') - sum(start, 'rows');
    return { rows, perRow: (sum(to, 'bytes') - sum(start, 'bytes')) / Math.max(1, rows) };
  };
  const [half, whole] = [roomUntil(middle), roomUntil(end)];
  if (half.rows >= ROWS_LEAST && whole.perRow > GROWTH_MOST * half.perRow) {
    ledger.broken(
      `a row takes ${whole.perRow.toFixed(0)} bytes of the database at the end, ${half.perRow.toFixed(0)} at half-time`,
    );
  }
  const bells = rowsOf(end, 'pgboss.job');
  if (bells > BELLS_MOST) ledger.broken(`the queue keeps ${bells} rows when all work is done`);
  const words = ({ rows, perRow }: ReturnType<typeof roomUntil>) =>
    `${perRow.toFixed(0)} bytes a row (${rows} rows)`;
  return `Room in the database: at half-time ${words(half)}, at the end ${words(whole)}; rows of the queue at the end: ${bells}`;
}
