'use client';

import { EmptyState } from '@/components/ui/page-states';
import { DRAWING_ORDER } from '@/lib/charts/curve';
import { kernelPoints } from '@/lib/charts/kernel-curve';
import { pdfTable } from '@/lib/charts/pdf-table';
import { ChartFrame } from './chart-frame';
import { binMiddleMmS, densitySMm, labelBin, pdfBands, pdfPoints, pdfRanges } from '@/lib/charts/pdf-series';
import type { PdfComponent, PdfPopulation, PdfSeries } from '@/lib/charts/pdf-series';
import { Plot } from './plot';
import { BandMark, DotMark, FloorMark, LabelMark, LineMark, NoiseMark } from './plot-marks';
import { POPULATION_LOOK } from './population-look';

interface PdfPlotProps {
  series: readonly PdfSeries[];
  scale: 'linear' | 'log';
  component: PdfComponent;
  /** One sentence with the finding; read in place of the plot. */
  label: string;
  /** Standard error of a velocity at this lag, m/s; marked on the axis. */
  noise_m_s?: number | null;
  fileName?: string;
  heightPx?: number;
}

type Place = { share: number; side: 'left' | 'right'; dxPx: number; dyPx: number };
/** Labels apart from each other: how high up the flank they point, which side, and where from there. */
const PLACES: Record<'log' | 'linear', Record<PdfPopulation, Place>> = {
  log: {
    free: { share: 0.75, side: 'right', dxPx: 28, dyPx: -2 },
    trapped: { share: 0.06, side: 'right', dxPx: 22, dyPx: -18 },
    undecided: { share: 0.05, side: 'left', dxPx: -40, dyPx: -26 },
    all: { share: 0.2, side: 'left', dxPx: -40, dyPx: -30 },
  },
  linear: {
    free: { share: 0.75, side: 'right', dxPx: 30, dyPx: -6 },
    trapped: { share: 0.3, side: 'right', dxPx: 30, dyPx: -34 },
    undecided: { share: 0.3, side: 'left', dxPx: -30, dyPx: -34 },
    all: { share: 0.6, side: 'left', dxPx: -30, dyPx: -20 },
  },
};
/** The kernel estimate of every population: a hairline over its histogram, which keeps the stroke. */
const KERNEL_LOOK = { stroke: 'var(--ink)', widthPx: 1 };
const SUBSCRIPTS: Partial<Record<PdfComponent, string>> = { x: 'x', y: 'y' };

/** Velocity density of each population, on a linear or a log axis, with 95 % bands. */
export function PdfPlot({
  series,
  scale,
  component,
  label,
  noise_m_s,
  fileName = 'velocity-pdf',
  heightPx,
}: PdfPlotProps) {
  const log = scale === 'log';
  const ranges = pdfRanges(series, log, component);
  if (!ranges) return <EmptyState>No velocity was measured at this lag.</EmptyState>;
  const drawn = DRAWING_ORDER.flatMap((population) => series.filter((one) => one.population === population));
  const words = SUBSCRIPTS[component] ? undefined : component === 'speed' ? 'speed' : component;
  return (
    <ChartFrame
      label={label}
      fileName={fileName}
      table={pdfTable(series)}
      caption={series.some(({ kernel }) => kernel) ? 'Hairline: kernel estimate' : undefined}
    >
      <Plot
        heightPx={heightPx}
        x={{ ...ranges.x, title: { symbol: 'v', sub: SUBSCRIPTS[component], words, unit: 'mm/s' } }}
        y={{ ...ranges.y, title: { words: 'density', unit: 's/mm' } }}
      >
        {drawn.flatMap((one) =>
          pdfBands(one.bins).map((rows) => (
            <BandMark
              key={`${one.population} ${rows[0].x}`}
              rows={rows}
              fill={POPULATION_LOOK[one.population].stroke}
              opacity={one.population === 'undecided' ? 0.1 : 0.2}
            />
          )),
        )}
        {drawn.map((one) => (
          <Series key={one.population} one={one} log={log} />
        ))}
        {drawn.map(({ population, kernel }) =>
          kernel ? <LineMark key={population} points={kernelPoints(kernel)} {...KERNEL_LOOK} /> : null,
        )}
        {drawn.map((one) => (
          <SeriesLabel key={one.population} one={one} scale={scale} />
        ))}
        {noise_m_s && component !== 'speed' ? <NoiseMark half={noise_m_s * 1000} /> : null}
      </Plot>
    </ChartFrame>
  );
}

function Series({ one, log }: { one: PdfSeries; log: boolean }) {
  const look = POPULATION_LOOK[one.population];
  const points = pdfPoints(one.bins, log);
  return (
    <g>
      <LineMark points={points} stroke={look.stroke} widthPx={look.widthPx} dash={look.dash} />
      {look.beads ? <DotMark points={points} fill={look.stroke} /> : null}
      {log ? (
        <FloorMark xs={one.bins.filter((bin) => bin.count === 0).map(binMiddleMmS)} stroke={look.stroke} />
      ) : null}
    </g>
  );
}

function SeriesLabel({ one, scale }: { one: PdfSeries; scale: 'log' | 'linear' }) {
  const { share, side, dxPx, dyPx } = PLACES[scale][one.population];
  const bin = labelBin(one.bins, share, side);
  if (!bin) return null;
  return (
    <LabelMark
      x={binMiddleMmS(bin)}
      y={densitySMm(bin.density_s_m)}
      dxPx={dxPx}
      dyPx={dyPx}
      words={one.population}
      note={one.finding}
    />
  );
}
