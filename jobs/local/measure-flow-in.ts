import type { FlowMeasures } from '@/tracking/flow-measures';
import {
  assembleFlow,
  FLOW_PARTS,
  type FlowInput,
  type FlowPart,
  type FlowPartResults,
} from '@/tracking/flow-parts';
import type { ComputePool } from '../compute/pool';
import type { TracksAt } from '../compute/track-file';
import { LONG_TIMEOUT_MS } from '../job-timeouts';
import type { StageOptions } from './stage-clock';

/** The flow measures by the children of a pool: first what tracks are, then all parts as children are free. */
export async function measureFlowIn(
  pool: ComputePool,
  input: Omit<FlowInput, 'found' | 'tracks'> & { tracks: TracksAt },
  { onProgress, onCpu }: StageOptions,
): Promise<FlowMeasures> {
  const steps = FLOW_PARTS.length + 1;
  const options = { timeoutMs: LONG_TIMEOUT_MS, onCpu };
  const found = await pool.run('judgeTracks', input, options);
  let done = 1;
  onProgress(done / steps);
  const results = await Promise.all(
    FLOW_PARTS.map(async (part): Promise<[FlowPart, FlowPartResults[FlowPart]]> => {
      const result = await pool.run('measureFlowPart', { ...input, part, found }, options);
      onProgress(++done / steps);
      return [part, result];
    }),
  );
  return assembleFlow(found, Object.fromEntries(results) as unknown as FlowPartResults);
}
