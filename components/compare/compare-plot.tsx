'use client';

import { ChartFrame } from '@/components/charts/chart-frame';
import { Plot } from '@/components/charts/plot';
import { LineMark } from '@/components/charts/plot-marks';
import { ErrorPoints, seriesLook, SERIES_MOST } from '@/components/charts/series-marks';
import { EmptyState } from '@/components/ui/page-states';
import { quantityText } from '@/lib/format/quantity';
import type { CompareView } from '@/lib/views/compare-view';
import { comparedPoints, comparedRanges, lawLine } from './compared-points';
import type { Against } from './use-comparison';

const X_TITLES = {
  vns: { symbol: 'v', sub: 'ns', unit: 'mm/s' },
  temperature: { symbol: 'T', unit: 'K' },
  'heat-flux': { symbol: 'q', unit: 'mW/cm^2' },
} as const;
const Y_TITLE = { symbol: 'L', power: '1/2', unit: 'mm^-1' };
const HEIGHT_PX = 446;
const GAMMA_S_CM2 = 1e4;

/** Root of the line density of every run against what drives it, with the law fitted to each campaign. */
export function ComparePlot({ view, against }: { view: CompareView; against: Against }) {
  const points = comparedPoints(view.runs, against);
  if (points.length === 0) {
    return <EmptyState>No run of this choice has both a line density and a place on this axis.</EmptyState>;
  }
  const ranges = comparedRanges(points, against);
  const shown = view.fits.slice(0, SERIES_MOST);
  return (
    <>
      <ChartFrame
        label={sentence(view, against)}
        fileName={`line-density-against-${against}`}
        table={table(points, against)}
      >
        <Plot
          heightPx={HEIGHT_PX}
          x={{ ...ranges.x, title: X_TITLES[against] }}
          y={{ ...ranges.y, title: Y_TITLE }}
        >
          {against === 'vns'
            ? shown.map((fit, index) => (
                <LineMark
                  key={fit.campaignId}
                  points={lawLine(fit, ranges.x.max)}
                  stroke={seriesLook(index).stroke}
                  widthPx={1.4}
                />
              ))
            : null}
          {shown.map(({ campaignId }, index) => (
            <ErrorPoints
              key={campaignId}
              points={points.filter(({ run }) => run.campaignId === campaignId)}
              look={seriesLook(index)}
            />
          ))}
        </Plot>
      </ChartFrame>
      {view.fits.length > SERIES_MOST ? (
        <p className="text-note text-ink-2">
          Only the first {SERIES_MOST} campaigns are drawn: more can’t be told apart. The table has all.
        </p>
      ) : null}
    </>
  );
}

function sentence({ fits, runs }: CompareView, against: Against): string {
  const name = { vns: 'counterflow velocity', temperature: 'temperature', 'heat-flux': 'heat flux' }[against];
  const laws = fits.flatMap(({ campaignName, gamma_s_m2 }) =>
    gamma_s_m2
      ? [`${campaignName}: gamma ${quantityText({ ...gamma_s_m2, siPerUnit: GAMMA_S_CM2, unit: 's/cm²' })}`]
      : [],
  );
  return `Root of the line density of ${runs.length} runs against ${name}. ${laws.join('; ')}`.trim();
}

function table(points: ReturnType<typeof comparedPoints>, against: Against) {
  const { symbol, unit } = X_TITLES[against];
  return {
    columns: [
      { name: 'campaign' },
      { name: 'run' },
      { name: against === 'vns' ? 'v_ns' : symbol, unit },
      { name: 'L^1/2', unit: 'mm^-1' },
      { name: 'low, 95 %', unit: 'mm^-1' },
      { name: 'high, 95 %', unit: 'mm^-1' },
    ],
    rows: points.map(({ run, x, y, yLow, yHigh }) => [run.campaignName, run.runName, x, y, yLow, yHigh]),
  };
}
