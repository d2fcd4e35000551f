import Link from 'next/link';
import { IntervalThread } from '@/components/ui/interval-thread';
import {
  axisAround,
  logGrid,
  shareOnLogAxis,
  type LogAxis,
  type ThreadInterval,
} from '@/lib/charts/log-axis';
import { EmptyState } from '@/components/ui/page-states';
import { Quantity, Unit } from '@/components/ui/quantity';
import { Cell, HeadCell, Row, Table } from '@/components/ui/table';
import { formatCount } from '@/lib/format/count';
import { quantityText } from '@/lib/format/quantity';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { DensityEstimate, ResultRow } from '@/lib/views/overview-view';

const { lineDensity, heatFlux } = DISPLAY_UNITS;
/** Width of the intervals' column, px. */
const AXIS_PX = 220;

/** Estimates that rest on this recording alone; a prior is drawn hollow. */
const isPrior = ({ method }: DensityEstimate) => method === 'heat-flux-prior';

function intervalsOf(estimates: readonly DensityEstimate[]): ThreadInterval[] {
  const combined = estimates.find(({ method, value }) => method === 'combined' && value !== null);
  const shown = combined ? [combined] : estimates.filter(({ value }) => value !== null);
  return shown.map((estimate) => ({
    value: estimate.value!,
    low: estimate.low ?? estimate.value!,
    high: estimate.high ?? estimate.value!,
    hollow: isPrior(estimate) || !combined,
    tone: combined ? 'ink' : 'amber',
  }));
}

/** Line density, share of trapped tracers and events of the newest finished analyses. */
export function ResultTable({ results }: { results: readonly ResultRow[] }) {
  if (results.length === 0)
    return <EmptyState>No results yet. They appear when an analysis is done.</EmptyState>;
  const axis = axisAround(results.flatMap(({ lineDensity: estimates }) => intervalsOf(estimates)));
  return (
    <Table label="New results">
      <thead>
        <tr>
          <HeadCell>Run</HeadCell>
          <HeadCell numeric unit={`${lineDensity.unit}, 95 %`}>
            Line density <i className="font-serif">L</i>
          </HeadCell>
          <HeadCell narrow="hide">{axis ? <AxisEnds axis={axis} /> : null}</HeadCell>
          <HeadCell numeric narrow="hide" unit="of named tracks">
            Trapped
          </HeadCell>
          <HeadCell numeric narrow="hide">
            Events
          </HeadCell>
        </tr>
      </thead>
      <tbody>
        {results.map((result) => (
          <ResultLine key={result.analysisId} result={result} axis={axis} />
        ))}
      </tbody>
    </Table>
  );
}

/** Decades of the axis over the intervals' column. */
function AxisEnds({ axis }: { axis: LogAxis }) {
  const decades = logGrid(axis).filter((value) =>
    Number.isInteger(Math.round(Math.log10(value) * 1e9) / 1e9),
  );
  return (
    <span className="relative block h-4 font-text" style={{ width: AXIS_PX }}>
      <span className="sr-only">Interval of the line density, logarithmic</span>
      {decades.map((value) => (
        <span
          key={value}
          aria-hidden="true"
          className="absolute -translate-x-1/2"
          style={{ left: Math.round(shareOnLogAxis(value, axis) * AXIS_PX) }}
        >
          <Unit>{`10^${Math.round(Math.log10(value))}`}</Unit>
        </span>
      ))}
    </span>
  );
}

function ResultLine({ result, axis }: { result: ResultRow; axis: LogAxis | null }) {
  const combined = result.lineDensity.find(({ method }) => method === 'combined');
  const intervals = intervalsOf(result.lineDensity);
  const named = result.trapped + result.free;
  return (
    <Row>
      <Cell head>
        <Link href={`/analyses/${result.analysisId}`}>{result.runName}</Link>{' '}
        <span className="text-ink-2">
          <Quantity value={result.temperature_K} digits={4} unit="K" />
          {result.heatFlux_W_m2 === null ? null : (
            <>
              , <Quantity value={result.heatFlux_W_m2} {...heatFlux} />
            </>
          )}
        </span>
        <span className="block text-small text-ink-3">{result.recordingName}</span>
      </Cell>
      <Cell numeric>
        {combined && combined.value !== null ? (
          <Quantity {...combined} siPerUnit={lineDensity.siPerUnit} />
        ) : (
          <span className={intervals.length > 1 ? 'text-amber-text' : 'text-ink-3'}>
            {intervals.length > 1 ? 'methods disagree' : 'no value'}
          </span>
        )}
      </Cell>
      <Cell narrow="hide">
        {axis && intervals.length > 0 ? (
          <IntervalThread
            axis={axis}
            widthPx={AXIS_PX}
            intervals={intervals}
            label={intervals.map((item) => quantityText({ ...item, ...lineDensity })).join(' or ')}
          />
        ) : null}
      </Cell>
      <Cell numeric narrow="hide">
        {named > 0 ? <Quantity value={result.trapped / named} digits={2} /> : null}
      </Cell>
      <Cell numeric narrow="hide">
        {formatCount(result.acceptedCandidates)}
      </Cell>
    </Row>
  );
}
