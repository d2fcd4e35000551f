import type { FlowMeasures } from '@/tracking/flow-measures';
import { measureFlow as measure } from '@/tracking/measure-flow';
import type { MeasureFlowInput } from '../tasks';
import type { WorkContext } from './work-context';

/** Populations, velocities, reconnections and estimates of a recording's tracks. */
export async function measureFlow(
  input: MeasureFlowInput,
  { onProgress }: WorkContext,
): Promise<FlowMeasures> {
  return measure(input.tracks, input.image, input.conditions, input.recipe, {
    known: input.known,
    onProgress: (share) => onProgress(share),
  });
}
