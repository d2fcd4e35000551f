import { accuracyOf, type PipelineRun, type StageSeconds } from './pipeline-run';
import type { BenchRecording } from './recording';
import { figure, textTable } from './text-table';
import { wholeSeconds, type WorkersRun } from './workers-run';

/** Throughputs of one core, stage by stage, and how many times the reference's each is. */
export function speedTable(
  runs: readonly PipelineRun[],
  reference: PipelineRun | null,
  { megapixels }: BenchRecording,
): string {
  const all = reference ? [reference, ...runs] : runs;
  const speed = (seconds: number, times: number) => {
    const ratio = reference ? ` (${figure(times)}x)` : '';
    return `${figure(megapixels / seconds)}${ratio}`;
  };
  const stage = (label: string, name: keyof StageSeconds) => [
    label,
    ...all.map(({ seconds }) => speed(seconds[name], (reference?.seconds[name] ?? NaN) / seconds[name])),
  ];
  const rate = (label: string, amount: (run: PipelineRun) => number, name: keyof StageSeconds) => {
    const perSecond = (run: PipelineRun) => amount(run) / run.seconds[name];
    return [
      label,
      ...all.map((run) => {
        const ratio = reference ? ` (${figure(perSecond(run) / perSecond(reference))}x)` : '';
        return `${figure(perSecond(run))}${ratio}`;
      }),
    ];
  };
  return textTable([
    ['one core, CPU time', ...all.map(({ name }) => name)],
    stage('reading, Mpx/s', 'reading'),
    ['measuring the image, s', ...all.map(({ seconds }) => figure(seconds.measuring))],
    stage('filter, Mpx/s', 'filter'),
    stage('detection, Mpx/s', 'detection'),
    rate('detection, spots/s', ({ spots }) => spots, 'detection'),
    stage('linking, Mpx/s', 'linking'),
    rate('linking, links/s', ({ links }) => links, 'linking'),
    stage('whole, Mpx/s', 'whole'),
    ['reading, share', ...all.map(({ seconds }) => figure(seconds.reading / seconds.whole))],
    ['spots', ...all.map(({ spots }) => figure(spots))],
  ]);
}

/** What each pipeline found, beside the truth. */
export function accuracyTable(runs: readonly PipelineRun[], recording: BenchRecording): string {
  const scores = runs.map((run) => accuracyOf(run, recording));
  const row = (label: string, pick: (score: (typeof scores)[number]) => number) => [
    label,
    ...scores.map((score) => pick(score).toFixed(3)),
  ];
  return textTable([
    ['points in tracks', ...runs.map(({ name }) => name)],
    row('found', ({ foundShare }) => foundShare),
    row('found, isolated', ({ isolatedFoundShare }) => isolatedFoundShare),
    row('false', ({ falseShare }) => falseShare),
    row('RMS error / bound', ({ rmsOverBound }) => rmsOverBound),
    row('alpha', ({ alpha }) => alpha),
    row('Jaccard', ({ jaccard }) => jaccard),
  ]);
}

/** The product's own processes by the clock on the wall, and what a second worker brings. */
export function workersTable(
  runs: readonly WorkersRun[],
  { megapixels }: BenchRecording,
  reference: PipelineRun | null,
): string {
  const columns = runs.flatMap(({ workers, cold, warm, peakMB }) => [
    { head: `${workers}, cold`, analysis: cold, peakMB: Number.NaN },
    { head: `${workers}, warm`, analysis: warm, peakMB },
  ]);
  const row = (label: string, pick: (column: (typeof columns)[number]) => number) => [
    label,
    ...columns.map((column) => figure(pick(column))),
  ];
  const [first] = runs;
  return [
    textTable([
      ['workers, wall clock', ...columns.map(({ head }) => head)],
      row('check, Mpx/s', ({ analysis }) => megapixels / analysis.timingsS.check),
      row('measure image, s', ({ analysis }) => analysis.timingsS['measure-image']),
      row('detection, Mpx/s', ({ analysis }) => megapixels / analysis.timingsS['detect-spots']),
      row('detection, spots/s', ({ analysis }) => analysis.spots / analysis.timingsS['detect-spots']),
      row('share of reading', ({ analysis }) => analysis.readingShare),
      row('linking, links/s', ({ analysis: { tracks, timingsS } }) => (tracks.frame.length - tracks.count) / timingsS['link-tracks']), // prettier-ignore
      row('measure flow, points/s', ({ analysis: { tracks, timingsS } }) => tracks.frame.length / timingsS['measure-flow']), // prettier-ignore
      row('whole, Mpx/s', ({ analysis }) => megapixels / wholeSeconds(analysis)),
      row('peak memory, MB', ({ peakMB }) => peakMB),
    ]),
    ...runs
      .slice(1)
      .map(
        ({ workers, warm }) =>
          `${workers} workers over 1, warm: detection ${(first.warm.timingsS['detect-spots'] / warm.timingsS['detect-spots']).toFixed(2)}x, ` +
          `whole ${(wholeSeconds(first.warm) / wholeSeconds(warm)).toFixed(2)}x.`,
      ),
    ...(reference ? [`Peak memory of the script on SciPy: ${figure(reference.peakMB)} MB.`] : []),
  ].join('\n');
}
