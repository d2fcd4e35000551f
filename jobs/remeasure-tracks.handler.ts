import type { TableTrack } from '@/lib/tables/track-rows';
import { tablePieces } from '@/lib/tables/track-rows';
import { readOrder } from '@/models/queries/analysis-outcome';
import { readLog } from '@/models/queries/correction-log';
import { marksAt, onlyMarksBetween } from '@/models/queries/marks';
import { streamTracks } from '@/models/queries/read-tracks';
import { remeasurable, saveRemeasured, saveWithMarks, type MeasuredTrack } from '@/models/queries/remeasured';
import { packTracks } from '@/tracking/corrections/pieces';
import type { FlowDetails, FlowMeasures, KnownPopulations } from '@/tracking/flow-measures';
import type { FlowPartResults } from '@/tracking/flow-parts';
import type { JobHandler } from './job-context';
import { LONG_TIMEOUT_MS } from './job-timeouts';
import { remeasureTracksJob } from './remeasure-tracks';

/**
 * Measures the flow of the tracks as corrected. Tracks that corrections left alone keep their populations;
 * the others are judged among all tracks, but for what a person said of them. Where only lines were marked since the
 * last results, the tracks are the same, and only the estimates that marks enter are made anew. While this computes, tracks
 * may be corrected further: results are stored for the revision that was read, and the next piece of work
 * waits already.
 */
export const remeasureTracksHandler: JobHandler<Record<string, never>> = {
  definition: remeasureTracksJob,
  async run({ claim, compute, report, commit }) {
    const { labId, subjectId: analysisId } = claim;
    const analysis = await remeasurable(labId, analysisId);
    const order = await readOrder(labId, analysisId);
    if (!analysis || !order?.recipe) return commit(async () => undefined);
    const { revision, measuredRevision, frames, width, height, changed } = analysis;
    const log = await readLog(labId, analysisId);
    const marks = marksAt(log, revision);
    const tracks: TableTrack[] = [];
    for await (const track of streamTracks(labId, analysisId, revision)) tracks.push(track);
    const pieces = tracks.flatMap((track) => tablePieces(track).map((piece) => ({ track, piece })));
    const packed = packTracks(pieces.map(({ piece }) => piece));
    const known: KnownPopulations = {
      known: Uint8Array.from(pieces, ({ track, piece }) =>
        !isJudged(track, piece) ? 2 : changed.has(track.track) ? 0 : 1,
      ),
      population: Uint8Array.from(pieces, ({ piece }) => piece.population ?? 2),
      pTrapped: Float32Array.from(pieces, ({ piece }) => piece.pTrapped),
    };
    const image = { frames, width, height };
    const { conditions, recipe } = order;
    const options = { timeoutMs: LONG_TIMEOUT_MS, onProgress: report };
    if (measuredRevision < revision && onlyMarksBetween(log, measuredRevision, revision)) {
      const input = { tracks: packed.tracks, image, conditions, recipe };
      const found = await compute('judgeTracks', { ...input, known }, options);
      const part = { part: 'estimates', ...input, found, marks } as const;
      const { estimates, details } = (await compute(
        'measureFlowPart',
        part,
        options,
      )) as FlowPartResults['estimates'];
      return commit((transaction) =>
        saveWithMarks(
          {
            analysisId,
            revision,
            measuredRevision,
            estimates,
            details: numberedDetails(details, packed.number),
          },
          transaction,
        ),
      );
    }
    const measures = await compute(
      'measureFlow',
      { tracks: packed.tracks, image, conditions, recipe, known, marks },
      options,
    );
    await commit(async (transaction) => {
      await saveRemeasured(
        {
          labId,
          analysisId,
          revision,
          measures: numbered(measures, packed.number),
          tracks: measuredTracks(pieces, measures, changed),
        },
        transaction,
      );
    });
  },
  // Results stay as they were, told as stale; the work can be asked for again from the queue.
  onGivenUp: async () => undefined,
};

/** Whether the population of a piece is the machine's to find: no person gave it. */
function isJudged(track: TableTrack, piece: TableTrack): boolean {
  return !track.given?.some(([from, to]) => from <= piece.frame[0] && piece.frame[0] <= to);
}

/** Measures of pieces as those of the tracks that they belong to. */
function numbered(measures: FlowMeasures, number: Uint32Array): FlowMeasures {
  return {
    ...measures,
    candidates: measures.candidates.map((candidate) => ({
      ...candidate,
      trackA: number[candidate.trackA],
      trackB: number[candidate.trackB],
    })),
    details: numberedDetails(measures.details, number),
  };
}

function numberedDetails(details: FlowDetails, number: Uint32Array): FlowDetails {
  const ofTrack = <T extends { track: number }>(one: T): T => ({ ...one, track: number[one.track] });
  return {
    ...details,
    changes: details.changes.map(ofTrack),
    segments: details.segments.map(ofTrack),
    features: details.features && {
      ...details.features,
      track: details.features.track.map((one) => number[one]),
    },
  };
}

/** What was found of each changed track: of its longest piece that no person judged. */
function measuredTracks(
  pieces: readonly { track: TableTrack; piece: TableTrack }[],
  { tracks }: FlowMeasures,
  changed: ReadonlySet<number>,
): MeasuredTrack[] {
  const best = new Map<number, { length: number; measured: MeasuredTrack }>();
  pieces.forEach(({ track, piece }, i) => {
    const length = piece.frame.length;
    if (!changed.has(track.track) || !isJudged(track, piece)) return;
    if (length <= (best.get(track.track)?.length ?? 0)) return;
    const p = tracks.pTrapped[i];
    const measured = {
      number: track.track,
      population: tracks.population[i],
      pTrapped: Number.isNaN(p) ? null : p,
    };
    best.set(track.track, { length, measured });
  });
  return Array.from(best.values(), ({ measured }) => measured);
}
