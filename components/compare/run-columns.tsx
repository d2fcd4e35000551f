import type { ReactNode } from 'react';
import { Moment } from '@/components/ui/moment';
import { Quantity, QuantitySymbol } from '@/components/ui/quantity';
import { CellNote } from '@/components/ui/table';
import { methodName } from '@/lib/charts/estimate-rows';
import { orderRuns, type SortValue } from '@/lib/compare/order-runs';
import { QUANTITIES } from '@/lib/compare/quantities';
import { DRIVE_WORDS } from '@/lib/compare/selection-words';
import { formatCount } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import { COMPARED_METHODS } from '@/lib/schemas/compare';
import type { ComparedRun } from '@/lib/views/compare-view';

/** A column of the table of runs. */
export interface RunColumn {
  key: string;
  /** As it is called where columns are chosen. */
  label: string;
  head: ReactNode;
  unit?: string;
  numeric: boolean;
  /** Shown where nobody has chosen. */
  usual?: true;
  /** Shown on a phone too. */
  narrow?: true;
  sort?: (run: ComparedRun) => SortValue;
  cell: (run: ComparedRun) => ReactNode;
}

const { heatFlux, velocity, lineDensity, smallLength, pressure } = DISPLAY_UNITS;
const speed = (of: ComparedRun['vns_m_s']) => (of ? Math.abs(of.value) : null);

function velocityColumn(key: 'vn' | 'vs' | 'vns', extra: Partial<RunColumn>): RunColumn {
  const of = (run: ComparedRun) => run[`${key}_m_s`];
  return {
    key,
    label: `v_${key.slice(1)}`,
    head: <QuantitySymbol letter="v" sub={key.slice(1)} />,
    unit: velocity.unit,
    numeric: true,
    sort: (run) => speed(of(run)),
    cell: (run) => <Quantity value={speed(of(run))} uncertainty={of(run)?.error} siPerUnit={velocity.siPerUnit} />, // prettier-ignore
    ...extra,
  };
}

const densityBy = (method: string): RunColumn => {
  const of = (run: ComparedRun) => run.lineDensities_m2.find((one) => one.method === method);
  return {
    key: `density-${method}`,
    label: `L, ${methodName(method).toLowerCase()}`,
    head: (
      <>
        <i className="font-serif">L</i>, {methodName(method).toLowerCase()}
      </>
    ),
    unit: `${lineDensity.unit}, 95 %`,
    numeric: true,
    sort: (run) => of(run)?.value ?? null,
    cell: (run) => {
      const { value = null, low, high } = of(run) ?? {};
      return <Quantity value={value} low={low} high={high} siPerUnit={lineDensity.siPerUnit} />;
    },
  };
};

/** Everything that can be told of a run beside the others. */
export const RUN_COLUMNS: readonly RunColumn[] = [
  { key: 'temperature', label: 'T', head: <i className="font-serif">T</i>, unit: 'K', numeric: true, usual: true, sort: (run) => run.temperature_K, cell: (run) => <Quantity value={run.temperature_K} digits={4} /> }, // prettier-ignore
  { key: 'heatFlux', label: 'q', head: <i className="font-serif">q</i>, unit: heatFlux.unit, numeric: true, usual: true, sort: (run) => run.heatFlux_W_m2, cell: (run) => <Quantity value={run.heatFlux_W_m2} siPerUnit={heatFlux.siPerUnit} /> }, // prettier-ignore
  velocityColumn('vn', {}),
  velocityColumn('vs', {}),
  velocityColumn('vns', { usual: true, narrow: true }),
  { key: 'pressure', label: 'pressure', head: 'Pressure', unit: pressure.unit, numeric: true, sort: (run) => run.pressure_Pa, cell: (run) => <Quantity value={run.pressure_Pa} siPerUnit={pressure.siPerUnit} /> }, // prettier-ignore
  { key: 'drive', label: 'drive', head: 'Drive', numeric: false, sort: (run) => run.drive, cell: (run) => run.drive && DRIVE_WORDS[run.drive] }, // prettier-ignore
  {
    key: 'density',
    label: 'L, by the chosen method',
    head: <i className="font-serif">L</i>,
    unit: `${lineDensity.unit}, 95 %`,
    numeric: true,
    usual: true,
    narrow: true,
    sort: (run) => run.lineDensity_m2?.value ?? null,
    cell: (run) => <Quantity {...(run.lineDensity_m2 ?? { value: null })} siPerUnit={lineDensity.siPerUnit} />, // prettier-ignore
  },
  ...COMPARED_METHODS.map(densityBy),
  { key: 'spacing', label: 'spacing', head: 'Spacing', unit: smallLength.unit, numeric: true, usual: true, sort: (run) => QUANTITIES.spacing.of(run)?.value ?? null, cell: (run) => <Quantity {...(QUANTITIES.spacing.of(run) ?? { value: null })} siPerUnit={smallLength.siPerUnit} /> }, // prettier-ignore
  { key: 'trapped', label: 'trapped share', head: 'Trapped', numeric: true, usual: true, sort: (run) => run.trappedShare?.value ?? null, cell: (run) => <Quantity {...(run.trappedShare ?? { value: null })} /> }, // prettier-ignore
  { key: 'tracks', label: 'tracks', head: 'Tracks', numeric: true, sort: (run) => run.tracks, cell: (run) => formatCount(run.tracks) }, // prettier-ignore
  { key: 'candidates', label: 'accepted candidates', head: 'Candidates', numeric: true, sort: (run) => run.acceptedCandidates, cell: (run) => formatCount(run.acceptedCandidates) }, // prettier-ignore
  {
    key: 'events',
    label: 'events per volume and time',
    head: 'Events',
    unit: 'mm^-3 s^-1, 95 %',
    numeric: true,
    usual: true,
    sort: (run) => run.events?.perVolumeTime_m3_s?.value ?? null,
    cell: ({ events }) =>
      events ? (
        <>
          <Quantity {...(events.perVolumeTime_m3_s ?? { value: null })} siPerUnit={1e9} />
          <CellNote>
            {events.candidates === 0 ? 'no candidates' : `${events.confirmed} of ${events.judged} judged`}
            {events.judged < events.candidates ? `, ${events.candidates - events.judged} open` : ''}
          </CellNote>
        </>
      ) : null,
  },
  { key: 'tail', label: 'tail exponent', head: 'Tail exponent', numeric: true, sort: (run) => run.tailExponent?.value ?? null, cell: (run) => <Quantity {...(run.tailExponent ?? { value: null })} /> }, // prettier-ignore
  { key: 'agreement', label: 'readers’ agreement', head: <>Agreement, κ</>, numeric: true, sort: (run) => run.agreement?.value ?? null, cell: (run) => <Quantity {...(run.agreement ?? { value: null })} /> }, // prettier-ignore
  {
    key: 'signed',
    label: 'sign-off',
    head: 'Signed off',
    numeric: false,
    usual: true,
    sort: (run) => run.signedOff?.at ?? null,
    cell: ({ signedOff }) =>
      signedOff ? (
        <>
          <Moment at={signedOff.at} />
          {signedOff.by ? <CellNote>{signedOff.by}</CellNote> : null}
        </>
      ) : null,
  },
];

export const usualColumns = (): string[] => RUN_COLUMNS.filter(({ usual }) => usual).map(({ key }) => key);

/** Columns that runs can be ordered by. */
export const RUN_SORTS: Record<string, (run: ComparedRun) => SortValue> = {
  campaign: ({ campaignName }) => campaignName.toLowerCase(),
  ...Object.fromEntries(RUN_COLUMNS.flatMap(({ key, sort }) => (sort ? [[key, sort]] : []))),
};

/** Runs in order of a column, `-` before it for descending. */
export const sortedRuns = (runs: readonly ComparedRun[], sort: string): ComparedRun[] =>
  orderRuns(runs, RUN_SORTS[sort.replace(/^-/, '')] ?? RUN_SORTS.campaign, sort.startsWith('-'));
