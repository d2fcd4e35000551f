import { deserialize, serialize } from 'node:v8';
import type { FlowPart, FlowPartResults } from '@/tracking/flow-parts';
import { FLOW_PARTS } from '@/tracking/flow-parts';
import type { NamedTracks } from '@/tracking/populations/named-tracks';
import { FLOW_STEPS } from './measure-flow';

// Parts wait in the database for a moment only, between workers of one version: the form of Node's own
// messages, in which numbers and arrays keep their bits, is enough.

/** A measured part, or the populations that all parts go on from, to be kept until all are there. */
export const encodeFlowPart = (result: NamedTracks | FlowPartResults[FlowPart]): Buffer => serialize(result);

export const decodePopulations = (bytes: Buffer): NamedTracks => deserialize(bytes) as NamedTracks;

/** What all steps left, by name. @throws RangeError when one is missing. */
export function decodeFlowParts(stored: readonly { part: string; result: Buffer }[]): {
  found: NamedTracks;
  parts: FlowPartResults;
} {
  const bytes = new Map(stored.map(({ part, result }) => [part, result]));
  const missing = FLOW_STEPS.filter((step) => !bytes.has(step));
  if (missing.length > 0)
    throw new RangeError(`Parts of the flow measures are missing: ${missing.join(', ')}.`);
  const parts = Object.fromEntries(FLOW_PARTS.map((part) => [part, deserialize(bytes.get(part)!)]));
  return { found: decodePopulations(bytes.get('populations')!), parts: parts as unknown as FlowPartResults };
}
