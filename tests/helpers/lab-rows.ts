import { newId } from '@/lib/ids';
import { models } from '@/models';
import type { Analysis } from '@/models/analysis';
import type { Recording } from '@/models/recording';
import type { Run } from '@/models/run';

export interface LabRows {
  labId: string;
  userId: string;
  campaignId: string;
}

/** A laboratory with one person and one campaign. */
export async function makeLab(name = 'Test Laboratory'): Promise<LabRows> {
  const { Lab, User, Membership, Campaign } = models();
  const [labId, userId, campaignId] = [newId(), newId(), newId()];
  await Lab.create({ id: labId, name, slug: `lab-${labId}` });
  await User.create({ id: userId, name: 'Test Person', email: `${userId}@lab.test` });
  await Membership.create({ id: newId(), labId, userId, roles: ['experimentalist'] });
  await Campaign.create({ id: campaignId, labId, name: 'Test campaign', createdBy: userId });
  return { labId, userId, campaignId };
}

/** A run with pixel size and frame interval, and whatever else is given. */
export function makeRun({ labId, userId, campaignId }: LabRows, fields: Partial<Run> = {}): Promise<Run> {
  return models().Run.create({
    id: newId(),
    labId,
    campaignId,
    name: 'Test run',
    pixelSizeM: 5e-6,
    frameIntervalS: 5e-3,
    sheetThicknessM: 1e-4,
    createdBy: userId,
    ...fields,
  });
}

export async function makeRecording(lab: LabRows, fields: Partial<Recording> = {}): Promise<Recording> {
  const runId = fields.runId ?? (await makeRun(lab)).id;
  return models().Recording.create({
    id: newId(),
    labId: lab.labId,
    name: 'stack.tif',
    kind: 'file',
    bytes: '0',
    state: 'ready',
    frames: 40,
    width: 64,
    height: 64,
    createdBy: lab.userId,
    ...fields,
    runId,
  });
}

/** An analysis in the middle of its work, without any job. */
export async function makeAnalysis(lab: LabRows, fields: Partial<Analysis> = {}): Promise<Analysis> {
  const recordingId = fields.recordingId ?? (await makeRecording(lab)).id;
  return models().Analysis.create({
    id: newId(),
    labId: lab.labId,
    recipeRequest: {},
    conditions: { pixelSize_m: 5e-6, frameInterval_s: 5e-3 },
    state: 'running',
    stage: 'measure-flow',
    frames: 40,
    chunkFrames: 5,
    codeVersion: 'test',
    ...fields,
    recordingId,
  });
}
