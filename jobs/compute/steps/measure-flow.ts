import type { FlowMeasures } from '@/tracking/flow-measures';
import { measureFlowPart as measurePart, type FlowPart, type FlowPartResults } from '@/tracking/flow-parts';
import { judgeTracks as judge, measureFlow as measure } from '@/tracking/measure-flow';
import type { NamedTracks } from '@/tracking/populations/named-tracks';
import type { MeasureFlowInput, MeasureFlowPartInput } from '../tasks';
import { tracksAt } from '../track-file';
import type { WorkContext } from './work-context';

/** Populations, velocities, reconnections and estimates of a recording's tracks. */
export async function measureFlow(
  input: MeasureFlowInput,
  { onProgress }: WorkContext,
): Promise<FlowMeasures> {
  return measure(await tracksAt(input.tracks), input.image, input.conditions, input.recipe, {
    known: input.known,
    marks: input.marks,
    onProgress: (share) => onProgress(share),
  });
}

/** Populations alone: what every part of the flow measures goes on from. */
export async function judgeTracks(input: MeasureFlowInput): Promise<NamedTracks> {
  return judge(await tracksAt(input.tracks), input.image, input.conditions, input.recipe, input.known);
}

/** One part of the flow measures; several processes may have one each. */
export async function measureFlowPart({
  part,
  tracks,
  ...input
}: MeasureFlowPartInput): Promise<FlowPartResults[FlowPart]> {
  return measurePart(part, { ...input, tracks: await tracksAt(tracks) });
}
