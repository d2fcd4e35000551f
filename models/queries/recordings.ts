import type { z } from 'zod';
import { notFound } from '@/lib/errors';
import type {
  ImageQuality,
  RecordingMetadata,
  RecordingState,
  StackRefusal,
  StackWarning,
} from '@/lib/recording-facts';
import type { recordingListQuery } from '@/lib/schemas/list-query';
import type { ListView, RehearsalMark } from '@/lib/views/common';
import type { RecordingView } from '@/lib/views/recording-view';
import { containing, listPage, type ListSource } from './list-page';
import { iso, itemOf, personJson, type ItemRow, type Made } from './person';
import { receivedByRecording } from './received-bytes';
import { REHEARSAL_MARK } from './rehearsal-mark';
import { selectRow } from './select';

interface Row extends ItemRow, Made {
  run_id: string;
  campaign_id: string;
  name: string;
  state: RecordingState;
  kind: 'file' | 'folder';
  bytes: string;
  frames: number | null;
  width: number | null;
  height: number | null;
  bit_depth: number | null;
  sha256: string | null;
  image_quality: ImageQuality | null;
  metadata: RecordingMetadata | null;
  refusal: StackRefusal | null;
  warnings: StackWarning[];
  deleted_at: Date | null;
  analyses: number;
  check_progress: number | null;
  damaged_since: Date | null;
  damage_detail: string | null;
  rehearsal: RehearsalMark | null;
}

const SELECT = `g.id, g.run_id, r.campaign_id, g.name, g.state, g.kind, g.bytes, g.frames, g.width, g.height,
  g.bit_depth, g.sha256, g.image_quality, g.metadata, g.refusal, g.warnings, g.revision, g.created_at,
  g.updated_at, g.deleted_at, ${personJson('u')} AS created_by,
  (SELECT count(*)::int FROM analyses a WHERE a.recording_id = g.id) AS analyses,
  (SELECT max(j.progress) FROM job_runs j WHERE g.state = 'checking' AND j.subject_id = g.id
     AND j.kind = 'ingest-recording' AND j.state IN ('waiting', 'running')) AS check_progress,
  k.since AS damaged_since, k.detail AS damage_detail, ${REHEARSAL_MARK} AS rehearsal`;
const FROM =
  'recordings g JOIN runs r ON r.id = g.run_id LEFT JOIN users u ON u.id = g.created_by LEFT JOIN file_checks k ON k.recording_id = g.id';

function viewOf(row: Row, received: number | undefined): RecordingView {
  const { refusal, metadata } = row;
  return {
    ...itemOf(row),
    runId: row.run_id,
    campaignId: row.campaign_id,
    name: row.name,
    state: row.state,
    kind: row.kind,
    bytes: Number(row.bytes),
    receivedBytes: row.state === 'arriving' ? (received ?? 0) : Number(row.bytes),
    checkProgress: row.state === 'checking' ? (row.check_progress ?? 0) : row.state === 'arriving' ? 0 : 1,
    frames: row.frames,
    width: row.width,
    height: row.height,
    bitDepth: row.bit_depth,
    sha256: row.sha256,
    imageQuality: row.image_quality,
    metadata: {
      pixelSize_m: metadata?.pixelSizeM ?? null,
      frameInterval_s: metadata?.frameIntervalS ?? null,
    },
    refusal,
    warnings: row.warnings,
    damage: row.damaged_since && {
      since: row.damaged_since.toISOString(),
      detail: row.damage_detail ?? '',
    },
    rehearsal: row.rehearsal,
    createdBy: row.created_by,
    deletedAt: iso(row.deleted_at),
    analyses: row.analyses,
  };
}

async function viewsOf(rows: Row[]): Promise<RecordingView[]> {
  const arriving = rows.filter(({ state }) => state === 'arriving').map(({ id }) => id);
  const received = await receivedByRecording(arriving);
  return rows.map((row) => viewOf(row, received.get(row.id)));
}

export async function listRecordings(
  labId: string,
  runId: string,
  query: z.output<typeof recordingListQuery>,
): Promise<ListView<RecordingView>> {
  const bind: unknown[] = [labId, runId];
  const where = [
    'g.lab_id = $1',
    'g.run_id = $2',
    `g.deleted_at IS ${query.deleted === 'only' ? 'NOT ' : ''}NULL`,
  ];
  if (query.q) where.push(`g.name ILIKE $${bind.push(containing(query.q))}`);
  if (query.state) where.push(`g.state = $${bind.push(query.state)}`);
  const sorts: ListSource['sorts'] = {
    createdAt: { by: 'g.created_at', type: 'timestamptz' },
    updatedAt: { by: 'g.updated_at', type: 'timestamptz' },
    name: { by: 'lower(g.name)', type: 'text' },
    bytes: { by: 'g.bytes', type: 'bigint' },
    frames: { by: 'coalesce(g.frames, -1)', type: 'int' },
    state: { by: 'g.state', type: 'text' },
  };
  const page = await listPage<Row>(
    { select: SELECT, from: FROM, where, bind, idColumn: 'g.id', sorts },
    query,
  );
  return { items: await viewsOf(page.rows), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND, for what another laboratory has as well. */
export async function getRecording(labId: string, id: string): Promise<RecordingView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE g.lab_id = $1 AND g.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('recording');
  return (await viewsOf([row]))[0];
}

/** Who made a recording, its run and its campaign: they may do to it what others may not. */
export async function makersOfRecording(labId: string, id: string): Promise<(string | null)[]> {
  const row = await selectRow<{ makers: (string | null)[] }>(
    `SELECT ARRAY[g.created_by, r.created_by, c.created_by] AS makers
     FROM recordings g JOIN runs r ON r.id = g.run_id JOIN campaigns c ON c.id = r.campaign_id
     WHERE g.lab_id = $1 AND g.id = $2`,
    [labId, id],
  );
  if (!row) throw notFound('recording');
  return row.makers;
}

export async function makersOfRun(labId: string, id: string): Promise<(string | null)[]> {
  const row = await selectRow<{ makers: (string | null)[] }>(
    `SELECT ARRAY[r.created_by, c.created_by] AS makers
     FROM runs r JOIN campaigns c ON c.id = r.campaign_id WHERE r.lab_id = $1 AND r.id = $2`,
    [labId, id],
  );
  if (!row) throw notFound('run');
  return row.makers;
}
