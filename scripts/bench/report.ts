import { lookAtTruth } from '@/tracking/assess/true-spots';
import { pipelinesOf, type Comparison } from './compare';
import { accuracyOf, type Accuracy, type PipelineRun, type StageSeconds } from './pipeline-run';
import { figure, textTable } from './text-table';

/** Throughputs of one core, stage by stage, and how many times the script's each is. */
export function speedTable(comparison: Comparison): string {
  const { plainScript, tunedScript, cold, recording } = comparison;
  const all = [...pipelinesOf(comparison), cold];
  const beside = (value: number, ofScript: number | undefined) =>
    ofScript === undefined ? figure(value) : `${figure(value)} (${figure(value / ofScript)}x)`;
  const rate = (label: string, amount: (run: PipelineRun) => number, name: keyof StageSeconds) => {
    const perSecond = (run: PipelineRun) => amount(run) / run.seconds[name];
    const ofScript = plainScript ? perSecond(plainScript) : undefined;
    return [label, ...all.map((run) => beside(perSecond(run), ofScript))];
  };
  const pixels = (label: string, name: keyof StageSeconds) => rate(label, () => recording.megapixels, name);
  return textTable([
    ['one core, CPU time', ...all.map(({ name }) => name)],
    pixels('reading, Mpx/s', 'reading'),
    ['measuring the image, s', ...all.map(({ seconds }) => figure(seconds.measuring))],
    pixels('filter and maxima, Mpx/s', 'search'),
    pixels('detection, Mpx/s', 'detection'),
    rate('detection, spots/s', ({ spots }) => spots, 'detection'),
    rate('linking, links/s', ({ links }) => links, 'linking'),
    pixels('whole, Mpx/s', 'whole'),
    ...(tunedScript
      ? [['whole, times the tuned script', ...all.map((run) => `${figure(timesOf(run, tunedScript))}x`)]]
      : []),
    ['reading, share of the whole', ...all.map(({ seconds }) => figure(seconds.reading / seconds.whole))],
    ['spots', ...all.map(({ spots }) => figure(spots))],
    ['peak memory of the process, MB', ...all.map(({ peakMB }) => figure(peakMB))],
  ]);
}

/** How many times as fast a pipeline is as another, from frames to tracks. */
export const timesOf = (run: PipelineRun, other: PipelineRun): number =>
  other.seconds.whole / run.seconds.whole;

/** What each pipeline found, beside the truth. */
export function accuracyTable(comparison: Comparison): string {
  const { recording } = comparison;
  // The plain kernels find what the compiled ones find, but for rounding.
  const all = pipelinesOf(comparison).filter((run) => run !== comparison.plainKernels);
  const truth = lookAtTruth(recording.scene, recording.camera);
  const scores = all.map((run) => accuracyOf(run, recording, truth));
  const row = (label: string, name: keyof Accuracy) => [
    label,
    ...scores.map((score) => {
      const value = Number(score[name]);
      return Number.isFinite(value) ? value.toFixed(3) : '-';
    }),
  ];
  return textTable([
    ['points in tracks', ...all.map(({ name }) => name)],
    row('recall', 'recall'),
    row('precision', 'precision'),
    row('RMS error / bound, isolated, SNR >= 4', 'rmsOverBound'),
    row('RMS of error / stated error', 'residualRms'),
    row('alpha', 'alpha'),
    row('JSC', 'jaccard'),
    row('JSC of tracks', 'jaccardTracks'),
  ]);
}
