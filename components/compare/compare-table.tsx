import Link from 'next/link';
import { SeriesMark, seriesLook } from '@/components/charts/series-marks';
import { Quantity, QuantitySymbol } from '@/components/ui/quantity';
import { Cell, CellNote, HeadCell, Row, Table } from '@/components/ui/table';
import { formatCount } from '@/lib/format/count';
import { DISPLAY_UNITS } from '@/lib/format/unit';
import type { ComparedRun } from '@/lib/views/compare-view';

const { heatFlux, velocity, lineDensity, smallLength } = DISPLAY_UNITS;

interface CompareTableProps {
  runs: readonly ComparedRun[];
  /** Campaigns in the order of their marks. */
  campaigns: readonly string[];
  sortBy: (field: string) => { href: string; current: 'ascending' | 'descending' | null };
}

const spacing = (density: number | null) => (density === null ? null : density ** -0.5);

/** All runs of the comparison with what was set and what was found. */
export function CompareTable({ runs, campaigns, sortBy }: CompareTableProps) {
  return (
    <Table label="Runs compared">
      <thead>
        <tr>
          <HeadCell sort={sortBy('campaign')}>Run</HeadCell>
          <HeadCell numeric unit="K" narrow="hide" sort={sortBy('temperature')}>
            T
          </HeadCell>
          <HeadCell numeric unit={heatFlux.unit} narrow="hide" sort={sortBy('heatFlux')}>
            Heat flux
          </HeadCell>
          <HeadCell numeric unit={velocity.unit} sort={sortBy('vns')}>
            <QuantitySymbol letter="v" sub="ns" />
          </HeadCell>
          <HeadCell numeric unit={`${lineDensity.unit}, 95 %`} sort={sortBy('density')}>
            <i className="font-serif">L</i>
          </HeadCell>
          <HeadCell numeric unit={smallLength.unit} narrow="hide">
            Spacing
          </HeadCell>
          <HeadCell numeric narrow="hide" sort={sortBy('trapped')}>
            Trapped
          </HeadCell>
          <HeadCell numeric narrow="hide" sort={sortBy('events')}>
            Candidates
          </HeadCell>
          <HeadCell narrow="hide">In the fit</HeadCell>
        </tr>
      </thead>
      <tbody>
        {runs.map((run) => (
          <Row key={run.runId}>
            <Cell head>
              <span className="flex items-baseline gap-2">
                <svg viewBox="-7 -7 14 14" aria-hidden="true" className="size-[13px] shrink-0 self-center">
                  <SeriesMark look={seriesLook(campaigns.indexOf(run.campaignId))} x={0} y={0} rPx={4.6} />
                </svg>
                <span>
                  <Link href={run.analysisId ? `/analyses/${run.analysisId}` : `/runs/${run.runId}`}>
                    {run.runName}
                  </Link>
                  <CellNote>{run.campaignName}</CellNote>
                </span>
              </span>
            </Cell>
            <Cell numeric narrow="hide">
              <Quantity value={run.temperature_K} digits={4} />
            </Cell>
            <Cell numeric narrow="hide">
              <Quantity value={run.heatFlux_W_m2} siPerUnit={heatFlux.siPerUnit} />
            </Cell>
            <Cell numeric>
              <Quantity
                value={run.vns_m_s ? Math.abs(run.vns_m_s.value) : null}
                uncertainty={run.vns_m_s?.error}
                siPerUnit={velocity.siPerUnit}
              />
            </Cell>
            <Cell numeric>
              <Quantity {...(run.lineDensity_m2 ?? { value: null })} siPerUnit={lineDensity.siPerUnit} />
            </Cell>
            <Cell numeric narrow="hide">
              <Quantity
                value={spacing(run.lineDensity_m2?.value ?? null)}
                low={spacing(run.lineDensity_m2?.high ?? null)}
                high={spacing(run.lineDensity_m2?.low ?? null)}
                siPerUnit={smallLength.siPerUnit}
              />
            </Cell>
            <Cell numeric narrow="hide">
              <Quantity {...(run.trappedShare ?? { value: null })} />
            </Cell>
            <Cell numeric narrow="hide">
              {run.acceptedCandidates === null ? null : formatCount(run.acceptedCandidates)}
            </Cell>
            <Cell narrow="hide" quiet>
              {run.leftOut ?? 'yes'}
            </Cell>
          </Row>
        ))}
      </tbody>
    </Table>
  );
}
