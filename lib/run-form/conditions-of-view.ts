import { runConditionsSchema, type RunConditionsInput } from '@/lib/schemas/conditions';
import type { RunView } from '@/lib/views/run-view';

const FIELDS = Object.keys(runConditionsSchema.shape) as (keyof RunConditionsInput)[];

/** The conditions of a run without its name, dates and results. */
export function conditionsOfView(run: RunView): RunConditionsInput {
  return Object.fromEntries(FIELDS.map((field) => [field, run[field]])) as RunConditionsInput;
}
