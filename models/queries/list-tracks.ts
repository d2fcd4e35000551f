import type { z } from 'zod';
import type { trackListQuery } from '@/lib/schemas/list-query';
import type { TrackRowView } from '@/lib/views/analysis-view';
import type { ListView } from '@/lib/views/common';
import { POPULATIONS } from '@/tracking/types';
import { listPage, type ListSource } from './list-page';
import { assertTracks } from './read-results';

interface Row {
  number: number;
  first_frame: number;
  last_frame: number;
  points: number;
  bridged: number;
  population: number | null;
  p_trapped: number | null;
  mean_speed_m_s: number | null;
  mean_x_px: number;
  mean_y_px: number;
  mean_brightness: number;
  changed: boolean;
}

const rounded = (value: number, digits: number): number => Number(value.toPrecision(digits));
const roundedOrNull = (value: number | null, digits: number): number | null =>
  value === null || !Number.isFinite(value) ? null : rounded(value, digits);

// What is not known sorts before everything that is.
const known = (column: string) => `coalesce(nullif(t.${column}, 'NaN'), '-infinity')::float8`;

const SORTS: ListSource['sorts'] = {
  track: { by: 't.number', type: 'int' },
  firstFrame: { by: 't.first_frame', type: 'int' },
  points: { by: 't.points', type: 'int' },
  meanSpeed_m_s: { by: known('mean_speed_m_s'), type: 'float8' },
  pTrapped: { by: known('p_trapped'), type: 'float8' },
  brightness: { by: known('mean_brightness'), type: 'float8' },
};

/** The tracks of an analysis that are valid now, by pages. @throws LabError NOT_FOUND, NOT_COMPUTED */
export async function listTracks(
  labId: string,
  analysisId: string,
  query: z.output<typeof trackListQuery>,
): Promise<ListView<TrackRowView>> {
  await assertTracks(labId, analysisId);
  const bind: unknown[] = [labId, analysisId];
  const where = ['a.lab_id = $1', 't.analysis_id = $2', 't.ended_revision IS NULL'];
  if (query.population) where.push(`t.population = $${bind.push(POPULATIONS.indexOf(query.population))}`);
  const page = await listPage<Row>(
    {
      select: `t.number, t.first_frame, t.last_frame, t.points, t.bridged, t.population, t.p_trapped,
        t.mean_speed_m_s, t.mean_x_px, t.mean_y_px, t.mean_brightness, t.changed`,
      from: 'tracks t JOIN analyses a ON a.id = t.analysis_id',
      where,
      bind,
      idColumn: 't.number',
      idType: 'int',
      sorts: SORTS,
    },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

function viewOf(row: Row): TrackRowView {
  return {
    track: row.number,
    firstFrame: row.first_frame,
    lastFrame: row.last_frame,
    points: row.points,
    bridged: row.bridged,
    population: row.population === null ? null : (POPULATIONS[row.population] ?? null),
    pTrapped: roundedOrNull(row.p_trapped, 4),
    meanSpeed_m_s: roundedOrNull(row.mean_speed_m_s, 6),
    x_px: rounded(row.mean_x_px, 6),
    y_px: rounded(row.mean_y_px, 6),
    brightness: rounded(row.mean_brightness, 6),
    changed: row.changed,
  };
}
