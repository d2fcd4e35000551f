import type { z } from 'zod';
import { notFound } from '@/lib/errors';
import { newId } from '@/lib/ids';
import type { CampaignCreate, CampaignPatch } from '@/lib/schemas/campaign';
import type { campaignListQuery } from '@/lib/schemas/list-query';
import type { CampaignView } from '@/lib/views/campaign-view';
import type { ListView } from '@/lib/views/common';
import { models } from '..';
import { getSequelize } from '../database';
import { changeRowOnRecord, type Change } from './change-row';
import { containing, listPage, type ListSource } from './list-page';
import { iso, itemOf, personJson, type ItemRow, type Made } from './person';
import { selectRow } from './select';
import { writeAudit } from './write-audit';

interface Row extends ItemRow, Made {
  name: string;
  description: string | null;
  tags: string[];
  readings: number;
  known_candidates: number;
  deleted_at: Date | null;
  runs: number;
  recordings: number;
  analyses: CampaignView['analyses'];
}

const RUNS = `(SELECT count(*)::int FROM runs r WHERE r.campaign_id = c.id AND r.deleted_at IS NULL)`;
const RECORDINGS = `(SELECT count(*)::int FROM recordings g JOIN runs r ON r.id = g.run_id
  WHERE r.campaign_id = c.id AND r.deleted_at IS NULL AND g.deleted_at IS NULL)`;

const SELECT = `c.id, c.name, c.description, c.tags, c.readings, c.known_candidates, c.revision, c.created_at, c.updated_at, c.deleted_at,
  ${personJson('u')} AS created_by, ${RUNS} AS runs, ${RECORDINGS} AS recordings,
  (SELECT json_build_object(
     'running', count(*) FILTER (WHERE a.state IN ('waiting', 'running')),
     'done', count(*) FILTER (WHERE a.state = 'done'),
     'failed', count(*) FILTER (WHERE a.state = 'failed'))
   FROM analyses a JOIN recordings g ON g.id = a.recording_id JOIN runs r ON r.id = g.run_id
   WHERE r.campaign_id = c.id AND r.deleted_at IS NULL AND g.deleted_at IS NULL) AS analyses`;
const FROM = 'campaigns c LEFT JOIN users u ON u.id = c.created_by';

function viewOf(row: Row): CampaignView {
  return {
    ...itemOf(row),
    name: row.name,
    description: row.description,
    tags: row.tags,
    readings: row.readings,
    knownCandidates: row.known_candidates,
    createdBy: row.created_by,
    deletedAt: iso(row.deleted_at),
    runs: row.runs,
    recordings: row.recordings,
    analyses: row.analyses,
  };
}

export async function listCampaigns(
  labId: string,
  query: z.output<typeof campaignListQuery>,
): Promise<ListView<CampaignView>> {
  const bind: unknown[] = [labId];
  const where = [
    'c.lab_id = $1',
    'NOT c.rehearsal',
    `c.deleted_at IS ${query.deleted === 'only' ? 'NOT ' : ''}NULL`,
  ];
  if (query.q)
    where.push(`(c.name ILIKE $${bind.push(containing(query.q))} OR c.description ILIKE $${bind.length})`);
  if (query.tag) where.push(`$${bind.push(query.tag)} = ANY(c.tags)`);
  const sorts: ListSource['sorts'] = {
    createdAt: { by: 'c.created_at', type: 'timestamptz' },
    updatedAt: { by: 'c.updated_at', type: 'timestamptz' },
    name: { by: 'lower(c.name)', type: 'text' },
    runs: { by: RUNS, type: 'int' },
    recordings: { by: RECORDINGS, type: 'int' },
  };
  const page = await listPage<Row>(
    { select: SELECT, from: FROM, where, bind, idColumn: 'c.id', sorts },
    query,
  );
  return { items: page.rows.map(viewOf), nextCursor: page.nextCursor };
}

/** @throws LabError NOT_FOUND, for what another laboratory has as well. */
export async function getCampaign(labId: string, id: string): Promise<CampaignView> {
  const row = await selectRow<Row>(`SELECT ${SELECT} FROM ${FROM} WHERE c.lab_id = $1 AND c.id = $2`, [
    labId,
    id,
  ]);
  if (!row) throw notFound('campaign');
  return viewOf(row);
}

export async function createCampaign(
  maker: { labId: string; userId: string },
  input: CampaignCreate,
): Promise<CampaignView> {
  const { name, description = null, tags = [], readings = 1, knownCandidates = 0 } = input;
  const { labId, userId } = maker;
  const id = newId();
  await getSequelize().transaction(async (transaction) => {
    const values = { id, labId, name, description, tags, readings, knownCandidates, createdBy: userId };
    await models().Campaign.create(values, { transaction });
    const entry = { action: 'campaign.made', subjectKind: 'campaign', subjectId: id };
    await writeAudit({ labId, userId, ...entry }, transaction);
  });
  return getCampaign(labId, id);
}

export async function patchCampaign(
  change: Change & { userId: string },
  input: CampaignPatch,
): Promise<CampaignView> {
  await changeRowOnRecord('campaigns', change, input, () => getCampaign(change.labId, change.id));
  return getCampaign(change.labId, change.id);
}
