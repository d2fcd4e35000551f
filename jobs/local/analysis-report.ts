import { POINT_BRIDGED, type Conditions } from '@/tracking/types';
import type { LocalAnalysis } from './analyse-stack';

/** Milliseconds are enough for a stage, six digits for a measured value. */
const seconds = (value: number) => Number(value.toFixed(3));
const six = (value: number) => Number(value.toPrecision(6));

/** `report.json`: what went in, what was found, how long it took and with which code. */
export function analysisReport(
  analysis: LocalAnalysis,
  { stackName, conditions, codeVersion, threads }: { stackName: string; conditions: Conditions; codeVersion: string; threads: number }, // prettier-ignore
) {
  const { stack, facts, tracks, measures, timingsS } = analysis;
  const bridgedPoints = tracks.flags.reduce((count, flags) => count + (flags & POINT_BRIDGED ? 1 : 0), 0);
  return {
    codeVersion,
    input: {
      name: stackName,
      sha256: stack.sha256,
      frames: stack.frames,
      width: stack.width,
      height: stack.height,
      bitDepth: stack.bitDepth,
    },
    conditions,
    recipe: analysis.recipe,
    frames: stack.frames,
    spots: analysis.spots,
    spotsPerFrame: analysis.spotsPerFrame,
    tracks: tracks.count,
    trackPoints: tracks.frame.length,
    bridgedPoints,
    noise: {
      frameNoise_counts: stack.imageQuality.noiseCounts,
      gain_counts_per_e: six(facts.gainCountsPerE),
      offset_counts: six(facts.offsetCounts),
      readNoise_e: six(facts.readNoiseE),
      badPixels: facts.badPixels,
    },
    spotSize_px: six(facts.spotSigmaPx),
    populations: measures.populations,
    pairs: measures.pairs,
    warnings: stack.warnings,
    threads,
    timings_s: Object.fromEntries(Object.entries(timingsS).map(([name, value]) => [name, seconds(value)])),
  };
}
