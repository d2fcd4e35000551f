import { expect, test } from 'vitest';
import { REPORTED_EVENTS_MOST, reportedEvents } from '@/lib/report/events';

const side = (exponent: number | null) => ({ exponent, exponentError: exponent && 0.03 }) as never;
const shown = (analysisId: string, event: number, verdict: 'yes' | null = null) => ({
  id: `${analysisId}-${event}`,
  analysisId,
  event,
  verdict,
  facts: { t0S: 1.5, t0ErrorS: 0.002, before: side(0.49), after: null, qValue: 0.01 },
});

test('every run shows its first reconnection before any shows a second, and all stand in the order of runs', () => {
  const runs = Array.from({ length: 6 }, (_, i) => ({ id: `a${i}`, runName: `Run ${i}` }));
  const events = runs.flatMap(({ id }) => [shown(id, 7, 'yes'), shown(id, 3)]);
  const picked = reportedEvents(events, runs);
  expect(picked.map(({ id }) => id)).toEqual([
    'a0-7',
    'a0-3',
    'a1-7',
    'a1-3',
    'a2-7',
    'a3-7',
    'a4-7',
    'a5-7',
  ]);
  expect(picked).toHaveLength(REPORTED_EVENTS_MOST);
  expect(picked[0]).toMatchObject({ runName: 'Run 0', confirmed: true, t0S: 1.5, exponentAfter: null });
  expect(picked[1].confirmed).toBe(false);
  expect(picked[0].exponentBefore).toEqual({ value: 0.49, uncertainty: 0.03 });
});

test('a run without reconnections shows none, and those of no analysis of the report are left out', () => {
  expect(reportedEvents([shown('other', 1)], [{ id: 'a', runName: 'Run' }])).toEqual([]);
});
