'use client';

import { ChartFrame } from '@/components/charts/chart-frame';
import { Plot } from '@/components/charts/plot';
import { LineMark } from '@/components/charts/plot-marks';
import { ErrorPoints, seriesLook, SERIES_MOST } from '@/components/charts/series-marks';
import { EmptyState } from '@/components/ui/page-states';
import { CONDITIONS, QUANTITIES, type ConditionName, type QuantityName } from '@/lib/compare/quantities';
import { quantityText } from '@/lib/format/quantity';
import type { CompareView } from '@/lib/views/compare-view';
import { comparedPoints, comparedRanges, lawLine } from './compared-points';

const HEIGHT_PX = 446;
const GAMMA_S_CM2 = 1e4;

interface ComparePlotProps {
  view: CompareView;
  against: ConditionName;
  quantity: QuantityName;
}

/** Any quantity of every run against any condition; the root of the line density with the law fitted to each campaign. */
export function ComparePlot({ view, against, quantity }: ComparePlotProps) {
  const points = comparedPoints(view.runs, against, quantity);
  if (points.length === 0) {
    return (
      <EmptyState>
        No run of this choice has both: {QUANTITIES[quantity].label} and {CONDITIONS[against].label}.
      </EmptyState>
    );
  }
  const ranges = comparedRanges(points, against, quantity);
  const shown = view.fits.slice(0, SERIES_MOST);
  const fitted = against === 'vns' && quantity === 'root-density';
  return (
    <>
      <ChartFrame
        label={sentence(view, against, quantity)}
        fileName={`${quantity}-against-${against}`}
        table={table(points, against, quantity)}
      >
        <Plot
          heightPx={HEIGHT_PX}
          x={{ ...ranges.x, title: CONDITIONS[against].title }}
          y={{ ...ranges.y, title: QUANTITIES[quantity].title }}
        >
          {fitted
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

function sentence({ fits, runs }: CompareView, against: ConditionName, quantity: QuantityName): string {
  const what = `${QUANTITIES[quantity].label} of ${runs.length} runs against ${CONDITIONS[against].label}.`;
  const laws = fits.flatMap(({ campaignName, gamma_s_m2 }) =>
    gamma_s_m2
      ? [`${campaignName}: gamma ${quantityText({ ...gamma_s_m2, siPerUnit: GAMMA_S_CM2, unit: 's/cm²' })}`]
      : [],
  );
  return `${what[0].toUpperCase()}${what.slice(1)} ${laws.join('; ')}`.trim();
}

function table(points: ReturnType<typeof comparedPoints>, against: ConditionName, quantity: QuantityName) {
  const [x, y] = [CONDITIONS[against], QUANTITIES[quantity]];
  return {
    columns: [
      { name: 'campaign' },
      { name: 'run' },
      { name: x.label, unit: x.title.unit },
      { name: y.label, unit: y.title.unit },
      { name: 'low, 95 %', unit: y.title.unit },
      { name: 'high, 95 %', unit: y.title.unit },
      { name: 'left out' },
    ],
    rows: points.map((point) => {
      const { campaignName, runName, leftOut } = point.run;
      return [campaignName, runName, point.x, point.y, point.yLow, point.yHigh, leftOut ?? ''];
    }),
  };
}
