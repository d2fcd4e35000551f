'use client';

import { ChartFrame } from '@/components/charts/chart-frame';
import { Plot } from '@/components/charts/plot';
import { BandMark, DotMark, LineMark } from '@/components/charts/plot-marks';
import { Section } from '@/components/ui/sheet';
import { formatCount } from '@/lib/format/count';
import type { AssessmentView } from '@/lib/views/rehearsal-view';
import { percentText, shareText } from './share-text';

type Detection = AssessmentView['detection'];

const HEIGHT_PX = 260;

/** Ends of a log axis around the classes, at 1, 2 or 5 of a decade. */
function lightRange(classes: Detection['classes']) {
  const low = Math.min(...classes.map(({ meanE }) => meanE));
  const high = Math.max(...classes.map(({ meanE }) => meanE));
  return { min: low / 1.4, max: high * 1.4 };
}

/** Found shares and errors of positions, by the brightness of the tracers. */
export function DetectionSection({ detection }: { detection: Detection }) {
  const { found, falsePerFrame, falseAskedPerFrame, truePoints, classes } = detection;
  const falseWords =
    falsePerFrame === null
      ? 'false spots can’t be told where real tracers are in sight'
      : `${falsePerFrame.toFixed(2)} false spots a frame, ${falseAskedPerFrame} asked for`;
  return (
    <Section flush title="Completeness" count={`of ${formatCount(truePoints)} tracer images`}>
      <p className="pb-2">
        {shareText(found)} of all tracer images are found; {falseWords}.
      </p>
      {classes.length > 1 ? <FoundPlot classes={classes} /> : null}
    </Section>
  );
}

function FoundPlot({ classes }: { classes: Detection['classes'] }) {
  const range = lightRange(classes);
  const points = classes.map(({ meanE, found }) => ({ x: meanE, y: percent(found.value), low: percent(found.low), high: percent(found.high) })); // prettier-ignore
  const least = Math.min(...points.map(({ low }) => low ?? 0));
  return (
    <ChartFrame
      label={`Share of tracer images found against brightness: ${percentText(classes[0].found.value)} of the faintest, ${percentText(classes.at(-1)!.found.value)} of the brightest.`}
      fileName="found-by-brightness"
      table={{
        columns: [
          { name: 'brightness', unit: 'electrons' },
          { name: 'from', unit: 'electrons' },
          { name: 'to', unit: 'electrons' },
          { name: 'SNR' },
          { name: 'images' },
          { name: 'found', unit: '%' },
          { name: 'low, 95 %', unit: '%' },
          { name: 'high, 95 %', unit: '%' },
        ],
        rows: classes.map((one) => [
          one.meanE,
          one.lowE,
          one.highE,
          one.snr,
          one.truePoints,
          percent(one.found.value),
          percent(one.found.low),
          percent(one.found.high),
        ]),
      }}
    >
      <Plot
        heightPx={HEIGHT_PX}
        x={{ ...range, log: true, title: { words: 'brightness', unit: 'electrons' } }}
        y={{ min: least > 50 ? 50 : 0, max: 100, title: { words: 'found', unit: '%' } }}
      >
        <BandMark
          rows={points.map(({ x, low, high }) => ({ x, low: low ?? 0, high: high ?? 100 }))}
          fill="var(--ink-2)"
          opacity={0.16}
        />
        <LineMark points={points} stroke="var(--ink)" widthPx={1.4} />
        <DotMark points={points} fill="var(--ink)" />
      </Plot>
    </ChartFrame>
  );
}

const percent = (share: number | null) => (share === null ? 0 : 100 * share);

/** Errors of positions against what is possible and what is stated. */
export function ErrorSection({ detection }: { detection: Detection }) {
  const { classes, isolated, errorPx, boundPx, statedPx, errorOverStated } = detection;
  if (errorPx === null || boundPx === null || statedPx === null) {
    return (
      <Section flush title="Positions">
        <p className="py-2 text-ink-2">No isolated tracer was found: nothing can be said of errors.</p>
      </Section>
    );
  }
  const known = classes.filter((one) => one.errorPx !== null && one.boundPx !== null && one.isolated >= 10);
  return (
    <Section flush title="Positions" count={`${formatCount(isolated)} isolated images, error per axis`}>
      <p className="pb-2">
        Off by {errorPx.toFixed(3)} px r.m.s., {(errorPx / boundPx).toFixed(2)} times the Cramér-Rao bound;
        the stated errors are {statedPx.toFixed(3)} px, and error over stated error is{' '}
        {errorOverStated?.toFixed(2)} r.m.s.
      </p>
      {known.length > 1 ? <ErrorPlot classes={known} /> : null}
    </Section>
  );
}

function ErrorPlot({ classes }: { classes: Detection['classes'] }) {
  const range = lightRange(classes);
  const series = (of: 'errorPx' | 'boundPx' | 'statedPx') =>
    classes.map((one) => ({ x: one.meanE, y: one[of] }));
  const all = classes.flatMap((one) => [one.errorPx!, one.boundPx!, one.statedPx ?? one.errorPx!]);
  const [first] = classes;
  return (
    <ChartFrame
      label={`Position error against brightness: ${first.errorPx!.toFixed(3)} px of the faintest, ${classes.at(-1)!.errorPx!.toFixed(3)} px of the brightest, beside the bound and the stated errors.`}
      fileName="position-error-by-brightness"
      caption="Error with beads, bound dotted, stated error dashed."
      table={{
        columns: [
          { name: 'brightness', unit: 'electrons' },
          { name: 'SNR' },
          { name: 'isolated images' },
          { name: 'error', unit: 'px' },
          { name: 'bound', unit: 'px' },
          { name: 'stated', unit: 'px' },
        ],
        rows: classes.map((one) => [
          one.meanE,
          one.snr,
          one.isolated,
          one.errorPx,
          one.boundPx,
          one.statedPx,
        ]),
      }}
    >
      <Plot
        heightPx={HEIGHT_PX}
        x={{ ...range, log: true, title: { words: 'brightness', unit: 'electrons' } }}
        y={{
          min: Math.min(...all) / 1.5,
          max: Math.max(...all) * 1.5,
          log: true,
          title: { words: 'error', unit: 'px' },
        }}
      >
        <LineMark points={series('boundPx')} stroke="var(--ink-2)" dash="2 4" />
        <LineMark points={series('statedPx')} stroke="var(--violet)" dash="6 4" />
        <LineMark points={series('errorPx')} stroke="var(--ink)" widthPx={1.4} />
        <DotMark points={series('errorPx')} fill="var(--ink)" />
      </Plot>
    </ChartFrame>
  );
}
